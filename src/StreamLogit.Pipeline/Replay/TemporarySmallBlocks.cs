using Microsoft.Data.Sqlite;
using StreamLogit.Engine;
using StreamLogit.Engine.Persistence;
using StreamLogit.Pipeline.State;

namespace StreamLogit.Pipeline.Replay;

/// <summary>
/// The small blocks of an engine that keeps no state, in a temporary database: there are too many of them for an index in memory.
/// </summary>
internal sealed class TemporarySmallBlocks : IDisposable
{
    private const int BlocksPerTransaction = 1 << 15;

    private readonly string _path = Path.Combine(Path.GetTempPath(), $"streamlogit-{Guid.NewGuid():N}.db");
    private readonly StateDatabase _database;
    private StateBlocks _unwritten = new();
    private int _unwrittenCount;

    public TemporarySmallBlocks() => _database = Guard(() => StateDatabase.OpenTemporary(_path));

    public void Write(long number, ReadOnlySpan<byte> bytes)
    {
        _unwritten.Put(ScoringEngine.SmallBlocksPart, number, bytes);
        if (++_unwrittenCount < BlocksPerTransaction) return;
        var blocks = _unwritten;
        _unwritten = new StateBlocks();
        _unwrittenCount = 0;
        Guard(() =>
        {
            using var transaction = _database.Begin();
            _database.WriteBlocks(blocks, transaction);
            transaction.Commit();
            return true;
        });
    }

    public int? Find(long number, ref byte[] target)
    {
        if (_unwritten.Find(ScoringEngine.SmallBlocksPart, number) is { } bytes)
        {
            if (target.Length < bytes.Length) target = new byte[bytes.Length];
            bytes.CopyTo(target, 0);
            return bytes.Length;
        }
        try
        {
            return _database.ReadBlock(ScoringEngine.SmallBlocksPart, number, ref target);
        }
        catch (SqliteException e)
        {
            throw StorageFault.OfDatabase(_path, e);
        }
    }

    public void Dispose()
    {
        _database.Dispose();
        File.Delete(_path);
    }

    private T Guard<T>(Func<T> use)
    {
        try
        {
            return use();
        }
        catch (SqliteException e)
        {
            throw StorageFault.OfDatabase(_path, e);
        }
    }
}
