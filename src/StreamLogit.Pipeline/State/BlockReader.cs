using Microsoft.Data.Sqlite;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Pipeline.State;

/// <summary>Reads single blocks of a state on a connection of its own, beside the one that commits.</summary>
internal sealed class BlockReader : IDisposable
{
    private readonly StateDatabase _database;

    public BlockReader(string path) => _database = StateDatabase.Open(path, SqliteOpenMode.ReadOnly);

    public int Read(string part, long number, ref byte[] target) =>
        Find(part, number, ref target) ?? throw new InvalidStateException($"the state has no block {number} of its part '{part}'");

    /// <summary>The length of a block, or null where there is no such block.</summary>
    public int? Find(string part, long number, ref byte[] target)
    {
        try
        {
            return _database.ReadBlock(part, number, ref target);
        }
        catch (SqliteException e)
        {
            throw StorageFault.OfDatabase(_database.Path, e);
        }
    }

    public IReadOnlyList<long> Numbers(string part)
    {
        try
        {
            return _database.ReadNumbers(part);
        }
        catch (SqliteException e)
        {
            throw StorageFault.OfDatabase(_database.Path, e);
        }
    }

    public void Dispose() => _database.Dispose();
}
