namespace StreamLogit.Engine.Persistence;

/// <summary>Which blocks of an array have changed since they were last saved. Marking costs one store.</summary>
internal sealed class DirtyBlocks
{
    private readonly int _shift;
    private readonly int _length;
    private readonly bool[] _isDirty;

    /// <param name="length">Elements of the array.</param>
    /// <param name="slotsPerBlock">Elements of a block, a power of two.</param>
    public DirtyBlocks(int length, int slotsPerBlock)
    {
        _shift = int.Log2(slotsPerBlock);
        _length = length;
        _isDirty = new bool[(length + slotsPerBlock - 1) >> _shift];
    }

    /// <summary>How many blocks there are.</summary>
    public int Count => _isDirty.Length;

    public void Mark(int element) => _isDirty[element >> _shift] = true;

    public void MarkAll() => _isDirty.AsSpan().Fill(true);

    /// <summary>The elements of a block.</summary>
    /// <exception cref="InvalidStateException">There is no such block.</exception>
    public Range RangeOf(long block)
    {
        if (block < 0 || block >= _isDirty.Length) throw new InvalidStateException($"block {block} lies outside of its array");
        int start = (int)block << _shift;
        return start..Math.Min(start + (1 << _shift), _length);
    }

    /// <summary>The changed blocks with their elements; afterwards none is dirty.</summary>
    public IEnumerable<(long Number, Range Elements)> Take()
    {
        for (int block = 0; block < _isDirty.Length; block++)
        {
            if (!_isDirty[block]) continue;
            _isDirty[block] = false;
            yield return (block, RangeOf(block));
        }
    }
}
