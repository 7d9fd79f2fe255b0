using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Learning;

/// <summary>What the rules have in common that keep some rows of settings for every slot. A coefficient is scale * its place in the first row.</summary>
internal abstract class SlotLearner<T> : ILearner where T : struct, ILanes<T>
{
    private readonly AlignedDoubles _logOdds;
    private readonly AlignedDoubles _weighted;

    protected SlotLearner(ReadOnlySpan<SettingOptions> settings, SlotBlocks blocks, int rowsPerSlot)
    {
        RowLength = RowWidth.Padded(settings.Length);
        RowsPerSlot = rowsPerSlot;
        Blocks = blocks;
        Table = new SlotTable(blocks.PaddedSlotCount, RowLength * rowsPerSlot);
        Scale = new LazyScale<T>(Table, blocks, RowLength, row: 0);
        Forgetting = new Forgetting<T>(RowLength, settings);
        Intercepts = new AlignedDoubles(RowLength);
        _logOdds = new AlignedDoubles(RowLength);
        _weighted = new AlignedDoubles(RowLength);
    }

    public int RowLength { get; }

    public int RowsPerSlot { get; }

    public abstract int NumbersPerSetting { get; }

    public ReadOnlySpan<double> LogOdds => _logOdds.Span;

    protected SlotBlocks Blocks { get; }

    protected SlotTable Table { get; }

    protected LazyScale<T> Scale { get; }

    protected Forgetting<T> Forgetting { get; }

    protected AlignedDoubles Intercepts { get; }

    public abstract void Learn(in EncodedVector x, in Lesson lesson);

    // Four sums in turn, joined at the end: the order is fixed, and four additions can be under way at once.
    public void Score(in EncodedVector x, double offset)
    {
        ref double table = ref Table.First;
        ref int slots = ref MemoryMarshal.GetReference(x.Slots);
        ref double values = ref MemoryMarshal.GetReference(x.Values);
        nuint count = (nuint)x.Slots.Length;
        nuint length = (nuint)RowLength;
        nuint stride = (nuint)Table.RowLength;
        for (nuint lane = 0; lane < length; lane += (nuint)T.Width)
        {
            T sum0 = T.Of(0), sum1 = T.Of(0), sum2 = T.Of(0), sum3 = T.Of(0);
            nuint i = 0;
            for (; i + 4 <= count; i += 4)
            {
                sum0 += Product(ref table, ref slots, ref values, i, stride, lane);
                sum1 += Product(ref table, ref slots, ref values, i + 1, stride, lane);
                sum2 += Product(ref table, ref slots, ref values, i + 2, stride, lane);
                sum3 += Product(ref table, ref slots, ref values, i + 3, stride, lane);
            }
            if (i < count) sum0 += Product(ref table, ref slots, ref values, i, stride, lane);
            if (i + 1 < count) sum1 += Product(ref table, ref slots, ref values, i + 1, stride, lane);
            if (i + 2 < count) sum2 += Product(ref table, ref slots, ref values, i + 2, stride, lane);
            T sum = sum0 + sum1 + (sum2 + sum3);
            T logOdds = T.Load(in Intercepts.First, lane) + T.Of(offset) + Scale.At(lane) * sum;
            logOdds.Store(ref _logOdds.First, lane);
        }
    }

    public void AddCoefficients(in EncodedVector x, ReadOnlySpan<double> settingWeights, Span<double> coefficients)
    {
        for (int lane = 0; lane < RowLength; lane++) _weighted[lane] = settingWeights[lane] * Scale[lane];
        for (int i = 0; i < x.Slots.Length; i++)
        {
            ref double row = ref Unsafe.Add(ref Table.First, (nint)x.Slots[i] * Table.RowLength);
            coefficients[i] += LaneSum.OfProducts<T>(in _weighted.First, in row, (nuint)RowLength);
        }
    }

    public virtual void Pull(int slot, double left)
    {
        nuint place = (nuint)slot * (nuint)Table.RowLength;
        for (nuint lane = 0; lane < (nuint)RowLength; lane += (nuint)T.Width)
            (T.Load(in Table.First, place + lane) * T.Of(left)).Store(ref Table.First, place + lane);
    }

    public double Intercept(int lane) => Intercepts[lane];

    public double Coefficient(int slot, int lane) => Scale[lane] * Table.Rows(slot, 1)[lane];

    public long NonZeroCount(int lane)
    {
        long count = 0;
        for (int block = 0; block < Blocks.Count; block++)
        {
            if (!Blocks.IsTouched(block)) continue;
            ReadOnlySpan<double> rows = Table.Rows(block * Blocks.SlotsPerBlock, Blocks.SlotsPerBlock);
            for (int place = lane; place < rows.Length; place += Table.RowLength)
                if (rows[place] != 0) count++;
        }
        return count;
    }

    public virtual void StartIntercept(int lane, double intercept) => Intercepts[lane] = intercept;

    public virtual void StartCoefficient(int slot, int lane, double coefficient) => Table.Rows(slot, 1)[lane] = coefficient;

    public Span<double> Rows(int slot, int count) => Table.Rows(slot, count);

    public virtual void SaveSetting(int lane, Span<double> numbers)
    {
        numbers[0] = Intercepts[lane];
        numbers[1] = Scale[lane];
    }

    public virtual void LoadSetting(int lane, ReadOnlySpan<double> numbers)
    {
        Intercepts[lane] = numbers[0];
        Scale[lane] = numbers[1];
    }

    /// <summary>What the settings give at present to the label that was not the case. Where it must be computed, <see cref="Score"/> has to come first.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    protected T MissProbability(in Lesson lesson, nuint lane) => lesson.MissProbability.IsEmpty
        ? LaneMath.Sigmoid(T.Of(0) - Margin(in lesson, lane))
        : T.Load(in MemoryMarshal.GetReference(lesson.MissProbability), lane);

    /// <summary>The log-odds of what was the case, from the last <see cref="Score"/>.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    protected T Margin(in Lesson lesson, nuint lane) => T.Load(in _logOdds.First, lane) * T.Of(2 * lesson.Label - 1);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static T Product(ref double table, ref int slots, ref double values, nuint i, nuint stride, nuint lane) =>
        T.Load(in table, (nuint)(uint)Unsafe.Add(ref slots, i) * stride + lane) * T.Of(Unsafe.Add(ref values, i));
}
