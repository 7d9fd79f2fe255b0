namespace StreamLogit.Engine.Persistence;

/// <summary>
/// Where an engine puts blocks that it has no room for in memory, and finds them again: the state of a worker, or a temporary file of a replay.
/// What is written here belongs to the next save of the engine, like any other change.
/// </summary>
public interface IBlockArchive
{
    /// <summary>Puts a block, replacing the one that has the same part and number.</summary>
    void Write(string part, long number, ReadOnlySpan<byte> bytes);

    /// <summary>Reads a block into the front of <paramref name="target"/>, which is made longer where it is too short.</summary>
    /// <returns>Its length in bytes.</returns>
    /// <exception cref="InvalidStateException">There is no such block.</exception>
    int Read(string part, long number, ref byte[] target);

    /// <summary>Reads a block into the front of <paramref name="target"/>, which is made longer where it is too short.</summary>
    /// <returns>Whether there is such a block; <paramref name="length"/> is its length in bytes.</returns>
    bool TryRead(string part, long number, ref byte[] target, out int length);

    /// <summary>Drops a block.</summary>
    void Remove(string part, long number);

    /// <summary>The numbers of the blocks of a part, in their order.</summary>
    IEnumerable<long> Numbers(string part);
}
