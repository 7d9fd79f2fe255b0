namespace StreamLogit.Engine.Features.Histories;

/// <summary>
/// The memory that the rows of all keys may take. A table grows while there is memory left, but each of the others is sure of
/// an eighth of an equal share, so that a table that fills late still has room.
/// </summary>
internal sealed class HistoryMemory(long limitBytes, int tables)
{
    private readonly long[] _used = new long[tables];

    /// <summary>Bytes in use.</summary>
    public long UsedBytes => _used.Sum();

    /// <summary>Asks for so many bytes for a table that has grown to what it asked for before.</summary>
    /// <returns>Whether it may have them. The first that a table asks for it always gets.</returns>
    public bool TryTake(int table, long bytes)
    {
        long left = limitBytes;
        for (int other = 0; other < _used.Length; other++)
            if (other != table) left -= Math.Max(_used[other], limitBytes / (8 * _used.Length));
        if (_used[table] > 0 && _used[table] + bytes > left) return false;
        _used[table] += bytes;
        return true;
    }
}
