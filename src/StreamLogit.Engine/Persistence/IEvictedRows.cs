namespace StreamLogit.Engine.Persistence;

/// <summary>
/// Where the rows of history keys go that memory has no room for, and from where they come back when the key is seen again.
/// The engine's thread alone calls it.
/// </summary>
public interface IEvictedRows
{
    /// <summary>Keeps a row, in place of an earlier one of the same key.</summary>
    /// <param name="key">The 64-bit hash of the key, which no key of another table has.</param>
    /// <param name="row">Its bytes, which are copied.</param>
    void Put(ulong key, ReadOnlySpan<byte> row);

    /// <summary>Reads the row that was put last.</summary>
    /// <param name="key">The key.</param>
    /// <param name="row">Receives its bytes.</param>
    /// <returns>How many bytes there are, or -1 where there is no row of that key.</returns>
    /// <exception cref="InvalidStateException">The row is longer than the room for it.</exception>
    int Read(ulong key, Span<byte> row);

    /// <summary>
    /// Adds what was put since the last save to the changes of this one, so that both become durable together. After a crash only rows that were
    /// saved are there, as they were at the last save.
    /// </summary>
    void Save(StateBlocks changes);
}
