using System.Runtime.CompilerServices;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Learning;

/// <summary>
/// A factor for every setting that stands before all its numbers in one row of every slot, so that all of them are multiplied by one
/// multiplication. Where it becomes small it is multiplied into the rows.
/// </summary>
internal sealed class LazyScale<T> where T : struct, ILanes<T>
{
    // Far enough from the end of the range that what is divided by the scale stays finite: a gradient is at most
    // 1e6 (weight) * 1e15 (value), its square 1e42, a step at most 1e6.
    private const double SmallestScale = 1e-120;

    private readonly SlotTable _table;
    private readonly SlotBlocks _blocks;
    private readonly int _rowLength;
    private readonly int _row;
    private readonly AlignedDoubles _scale;

    /// <param name="table">The table.</param>
    /// <param name="blocks">Which of its slots were written.</param>
    /// <param name="rowLength">Places in a row of settings.</param>
    /// <param name="row">Which of the rows of a slot the factor belongs to.</param>
    public LazyScale(SlotTable table, SlotBlocks blocks, int rowLength, int row)
    {
        _table = table;
        _blocks = blocks;
        _rowLength = rowLength;
        _row = row;
        _scale = new AlignedDoubles(rowLength);
        _scale.Span.Fill(1);
    }

    public double this[int lane]
    {
        get => _scale[lane];
        set => _scale[lane] = value;
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public T At(nuint lane) => T.Load(in _scale.First, lane);

    /// <summary>Multiplies every number of the settings by a factor from 0 to 1 and returns their scales.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public T Multiply(nuint lane, T factor)
    {
        T scale = At(lane) * factor;
        T isSmall = T.Greater(T.Of(SmallestScale), scale);
        if (T.Any(isSmall)) scale = Fold(lane, scale, isSmall);
        scale.Store(ref _scale.First, lane);
        return scale;
    }

    // Only the settings whose own scale is small, so that what else lies in the register changes no bit.
    [MethodImpl(MethodImplOptions.NoInlining)]
    private T Fold(nuint lane, T scale, T isSmall)
    {
        T factor = T.Select(isSmall, scale, T.Of(1));
        for (int block = 0; block < _blocks.Count; block++)
        {
            if (!_blocks.IsTouched(block)) continue;
            ref double rows = ref _table.Rows(block * _blocks.SlotsPerBlock, _blocks.SlotsPerBlock)[0];
            for (int slot = 0; slot < _blocks.SlotsPerBlock; slot++)
            {
                nuint place = (nuint)(slot * _table.RowLength + _row * _rowLength) + lane;
                (T.Load(in rows, place) * factor).Store(ref rows, place);
            }
        }
        _blocks.MarkAllTouched();
        return T.Select(isSmall, T.Of(1), scale);
    }
}
