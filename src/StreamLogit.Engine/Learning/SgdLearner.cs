using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Learning;

/// <summary>
/// Stochastic gradient descent on the log-loss, see <see cref="SgdSetting"/>. A coefficient is scale * row value, with one scale a setting,
/// so that a step decays every coefficient by one multiplication.
/// </summary>
internal sealed class SgdLearner<T> : ILearner where T : struct, ILanes<T>
{
    // Where the scale falls below this, it is multiplied into the rows. Far enough from the end of the range that
    // gradient / scale stays finite: a gradient is at most 1e6 (weight) * 1e15 (value) * the step.
    private const double SmallestScale = 1e-120;

    private readonly SlotTable _table;
    private readonly SlotBlocks _blocks;
    private readonly StepSchedule<T> _schedule;
    private readonly double[] _weightDecay;
    private readonly bool _decays;
    private readonly double[] _learned;
    private readonly double[] _intercept;
    private readonly double[] _scale;
    private readonly double[] _logOdds;

    public SgdLearner(ReadOnlySpan<SgdSetting> settings, SlotBlocks blocks)
    {
        RowLength = RowWidth.Padded(settings.Length);
        _blocks = blocks;
        _table = new SlotTable(blocks.PaddedSlotCount, RowLength);
        _weightDecay = new double[RowLength];
        _learned = new double[RowLength];
        _intercept = new double[RowLength];
        _scale = new double[RowLength];
        _logOdds = new double[RowLength];
        Array.Fill(_scale, 1);
        double[] steps = new double[settings.Length], decays = new double[settings.Length];
        for (int lane = 0; lane < settings.Length; lane++)
        {
            (steps[lane], decays[lane], _weightDecay[lane]) = settings[lane];
            _decays |= _weightDecay[lane] != 0;
        }
        _schedule = new StepSchedule<T>(RowLength, steps, decays);
    }

    public int RowLength { get; }

    public ReadOnlySpan<double> LogOdds => _logOdds;

    public int DoublesPerSlot => RowLength;

    public int DoublesPerSetting => 3;

    public void StartAt(double intercept) => Array.Fill(_intercept, intercept);

    public void Score(in EncodedVector x) => ComputeLogOdds(in x);

    public void Learn(in EncodedVector x, int label, double weight, ReadOnlySpan<double> missProbability)
    {
        if (missProbability.IsEmpty) ComputeLogOdds(in x);
        double signedWeight = label == 1 ? weight : -weight;
        ref double table = ref _table.First;
        ref int slots = ref MemoryMarshal.GetReference(x.Slots);
        ref double values = ref MemoryMarshal.GetReference(x.Values);
        nuint length = (nuint)RowLength;
        for (nuint lane = 0; lane < length; lane += (nuint)T.Width)
        {
            T miss = missProbability.IsEmpty ? MissProbability(lane, label) : T.Load(in missProbability[0], lane);
            T k = T.Load(in _learned[0], lane) + T.Of(1);
            k.Store(ref _learned[0], lane);
            T step = _schedule.Step(lane, k);
            T move = step * T.Of(signedWeight) * miss;
            (T.Load(in _intercept[0], lane) + move).Store(ref _intercept[0], lane);
            if (_decays) move /= Decay(lane, step);
            for (int i = 0; i < x.Slots.Length; i++)
            {
                nuint place = (nuint)(uint)Unsafe.Add(ref slots, i) * length + lane;
                (T.Load(in table, place) + move * T.Of(Unsafe.Add(ref values, i))).Store(ref table, place);
            }
        }
    }

    public void AddCoefficients(in EncodedVector x, ReadOnlySpan<double> settingWeights, Span<double> coefficients)
    {
        Span<double> scaled = stackalloc double[RowLength];
        for (int lane = 0; lane < scaled.Length; lane++) scaled[lane] = settingWeights[lane] * _scale[lane];
        for (int i = 0; i < x.Slots.Length; i++)
        {
            ref double row = ref Unsafe.Add(ref _table.First, (nint)x.Slots[i] * RowLength);
            coefficients[i] += LaneSum.OfProducts<T>(in scaled[0], in row, (nuint)RowLength);
        }
    }

    public double Intercept(int lane) => _intercept[lane];

    public double Coefficient(int slot, int lane) => _scale[lane] * _table.Rows(slot, 1)[lane];

    public Span<double> Rows(int slot, int count) => _table.Rows(slot, count);

    public void SaveSetting(int lane, Span<double> numbers)
    {
        numbers[0] = _learned[lane];
        numbers[1] = _intercept[lane];
        numbers[2] = _scale[lane];
    }

    public void LoadSetting(int lane, ReadOnlySpan<double> numbers)
    {
        _learned[lane] = numbers[0];
        _intercept[lane] = numbers[1];
        _scale[lane] = numbers[2];
    }

    // Four sums in turn, joined at the end: the order is fixed, and four additions can be under way at once.
    private void ComputeLogOdds(in EncodedVector x)
    {
        ref double table = ref _table.First;
        ref int slots = ref MemoryMarshal.GetReference(x.Slots);
        ref double values = ref MemoryMarshal.GetReference(x.Values);
        int count = x.Slots.Length;
        nuint length = (nuint)RowLength;
        for (nuint lane = 0; lane < length; lane += (nuint)T.Width)
        {
            T sum0 = T.Of(0), sum1 = T.Of(0), sum2 = T.Of(0), sum3 = T.Of(0);
            int i = 0;
            for (; i + 4 <= count; i += 4)
            {
                sum0 += Product(ref table, ref slots, ref values, i, length, lane);
                sum1 += Product(ref table, ref slots, ref values, i + 1, length, lane);
                sum2 += Product(ref table, ref slots, ref values, i + 2, length, lane);
                sum3 += Product(ref table, ref slots, ref values, i + 3, length, lane);
            }
            if (i < count) sum0 += Product(ref table, ref slots, ref values, i, length, lane);
            if (i + 1 < count) sum1 += Product(ref table, ref slots, ref values, i + 1, length, lane);
            if (i + 2 < count) sum2 += Product(ref table, ref slots, ref values, i + 2, length, lane);
            T sum = sum0 + sum1 + (sum2 + sum3);
            (T.Load(in _intercept[0], lane) + T.Load(in _scale[0], lane) * sum).Store(ref _logOdds[0], lane);
        }
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static T Product(ref double table, ref int slots, ref double values, int i, nuint length, nuint lane) =>
        T.Load(in table, (nuint)(uint)Unsafe.Add(ref slots, i) * length + lane) * T.Of(Unsafe.Add(ref values, i));

    private T MissProbability(nuint lane, int label)
    {
        T logOdds = T.Load(in _logOdds[0], lane);
        return LaneMath.Sigmoid(label == 1 ? T.Of(0) - logOdds : logOdds);
    }

    // Decays every coefficient of the settings and returns their scales.
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private T Decay(nuint lane, T step)
    {
        T factor = T.Of(1) - step * T.Load(in _weightDecay[0], lane);
        factor = T.Select(T.Greater(factor, T.Of(0)), factor, T.Of(0));
        T scale = T.Load(in _scale[0], lane) * factor;
        T isSmall = T.Greater(T.Of(SmallestScale), scale);
        if (T.Any(isSmall)) scale = Fold(lane, scale, isSmall);
        scale.Store(ref _scale[0], lane);
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
                nuint place = (nuint)slot * (nuint)RowLength + lane;
                (T.Load(in rows, place) * factor).Store(ref rows, place);
            }
        }
        _blocks.MarkAllTouched();
        return T.Select(isSmall, T.Of(1), scale);
    }
}
