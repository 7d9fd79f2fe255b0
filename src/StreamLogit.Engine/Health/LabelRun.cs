using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;
using System.Runtime.Intrinsics.X86;
using StreamLogit.Engine.Health.Cohorts;
using StreamLogit.Engine.Health.RollUps;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Health;

/// <summary>
/// A short run of labels with their probabilities and losses, which are computed on several labels at once. What is computed and added up has the same bits however
/// labels are cut into runs: each label by itself, and sums label by label.
/// </summary>
internal sealed class LabelRun
{
    /// <summary>The most labels of a run; a multiple of every vector's width.</summary>
    public const int Capacity = 64;

    private readonly double[] _logOdds = new double[Capacity];
    private readonly double[] _margins = new double[Capacity];
    private readonly double[] _weights = new double[Capacity];
    private readonly double[] _labels = new double[Capacity];
    private readonly bool[] _alerts = new bool[Capacity];
    private readonly long[] _clocks = new long[Capacity];
    private readonly long[] _scoredAt = new long[Capacity];
    private readonly int[] _standsFor = new int[Capacity];
    private readonly ulong[] _slices = new ulong[Capacity];
    private readonly double[] _probabilities = new double[Capacity];
    private readonly double[] _logLosses = new double[Capacity];
    private readonly double[] _baseRates = new double[Capacity]; // of what happened
    private readonly double[] _baseRateLogLosses = new double[Capacity];

    /// <summary>How many labels it has.</summary>
    public int Count { get; private set; }

    /// <summary>The probability that was published for each label's event.</summary>
    public ReadOnlySpan<double> Probabilities => _probabilities.AsSpan(0, Count);

    /// <summary>-ln of the probability that was published for what happened, finite even where that rounds to 0.</summary>
    public ReadOnlySpan<double> LogLosses => _logLosses.AsSpan(0, Count);

    /// <summary>The log-odds that were published for each label's event.</summary>
    public ReadOnlySpan<double> LogOdds => _logOdds.AsSpan(0, Count);

    /// <summary>-ln of the probability that the base rate gave to each.</summary>
    public ReadOnlySpan<double> BaseRateLogLosses => _baseRateLogLosses.AsSpan(0, Count);

    /// <summary>Whether the decision on each label's event was <c>alert</c>.</summary>
    public ReadOnlySpan<bool> Alerts => _alerts.AsSpan(0, Count);

    /// <summary>0 or 1.</summary>
    public ReadOnlySpan<double> Labels => _labels.AsSpan(0, Count);

    /// <summary>Their weights.</summary>
    public ReadOnlySpan<double> Weights => _weights.AsSpan(0, Count);

    /// <summary>The stream's clock when each came, in microseconds.</summary>
    public ReadOnlySpan<long> Clocks => _clocks.AsSpan(0, Count);

    /// <summary>The stream's clock when the event of each was scored, in microseconds.</summary>
    public ReadOnlySpan<long> ScoredAt => _scoredAt.AsSpan(0, Count);

    /// <summary>How many events each is the label of; 0 where it is only assumed.</summary>
    public ReadOnlySpan<int> StandsFor => _standsFor.AsSpan(0, Count);

    /// <summary>The codes of their slices.</summary>
    public ReadOnlySpan<ulong> Slices => _slices.AsSpan(0, Count);

    public void Clear() => Count = 0;

    // Field by field here and below: a struct copied as a whole right after its fields were written makes the processor wait for them.
    /// <summary>Adds a label.</summary>
    /// <param name="label">The label.</param>
    /// <param name="baseRate">The probability of label 1 that the base rate gave.</param>
    public void Add(in CountedLabel label, double baseRate)
    {
        int i = Count++;
        _baseRates[i] = label.Label == 1 ? baseRate : 1 - baseRate;
        _logOdds[i] = label.LogOdds;
        _margins[i] = label.Label == 1 ? -label.LogOdds : label.LogOdds;
        _weights[i] = label.Weight;
        _labels[i] = label.Label;
        _alerts[i] = label.Alert != 0;
        _clocks[i] = label.ClockMicroseconds;
        _scoredAt[i] = label.ScoredAtMicroseconds;
        _standsFor[i] = label.StandsFor;
        _slices[i] = label.Slices;
    }

    /// <summary>Adds a label whose loss to the base rate is known.</summary>
    public void Add(in LastLabel label)
    {
        int i = Count++;
        _logOdds[i] = label.LogOdds;
        _margins[i] = label.Label == 1 ? -label.LogOdds : label.LogOdds;
        _weights[i] = label.Weight;
        _labels[i] = label.Label;
        _alerts[i] = label.Alert != 0;
        _baseRateLogLosses[i] = label.BaseRateLogLoss;
    }

    /// <summary>What the window of the last labels keeps of a label.</summary>
    public LastLabel KeptOf(int i) => new()
    {
        LogOdds = _logOdds[i],
        Weight = _weights[i],
        BaseRateLogLoss = _baseRateLogLosses[i],
        Label = (int)_labels[i],
        Alert = _alerts[i] ? 1 : 0,
    };

    /// <summary>Computes what the base rate loses on each label.</summary>
    public void ComputeBaseRate()
    {
        if (Vector512.IsHardwareAccelerated) ComputeBaseRate<Lanes8>();
        else if (Vector256.IsHardwareAccelerated) ComputeBaseRate<Lanes4>();
        else ComputeBaseRate<Lanes2>();
    }

    /// <summary>Computes probabilities and log-losses.</summary>
    public void ComputeLosses()
    {
        if (Vector512.IsHardwareAccelerated) ComputeLosses<Lanes8>();
        else if (Vector256.IsHardwareAccelerated) ComputeLosses<Lanes4>();
        else ComputeLosses<Lanes2>();
    }

    /// <summary>Adds all labels to sums and to the cells of their bins.</summary>
    public void AddTo(ref LabelSums sums, Tally tally)
    {
        int i = 0;
        if (Avx.IsSupported)
            for (; i <= Count - Vector256<double>.Count; i += Vector256<double>.Count) AddFourTo(i, ref sums, tally);
        for (; i < Count; i++) AddTo(i, ref sums, tally);
    }

    /// <summary>
    /// Adds four labels with the same bits as one after the other: what each contributes is computed for four labels at once, turned around, and then
    /// added label by label to four sums at once.
    /// </summary>
    private void AddFourTo(int i, ref LabelSums sums, Tally tally)
    {
        var (w, y, p) = (Load(_weights, i), Load(_labels, i), Load(_probabilities, i));
        var z = Load(_logOdds, i);
        var one = Vector256<double>.One;
        var w2 = w * w;
        var loss = w * Load(_logLosses, i);
        var miss = y - p;
        var lever = one - (p + p);
        var promised = w * p;
        var came = w * y;
        var variance = w2 * (p * (one - p));
        var edge = Vector256.Create(LogOddsBins.OuterEnd);
        var cut = Vector256.Min(Vector256.Max(z, -edge), edge);

        ref double sum = ref Unsafe.As<LabelSums, double>(ref sums);
        Turn(one, w, w2, loss, out var a0, out var a1, out var a2, out var a3);
        (Vector256.LoadUnsafe(ref sum, 0) + a0 + a1 + a2 + a3).StoreUnsafe(ref sum, 0);
        Turn(w * loss, loss * loss, w * Load(_baseRateLogLosses, i), w * (miss * miss), out a0, out a1, out a2, out a3);
        (Vector256.LoadUnsafe(ref sum, 4) + a0 + a1 + a2 + a3).StoreUnsafe(ref sum, 4);
        Turn(variance, w * (miss * lever), variance * (lever * lever), came * cut, out a0, out a1, out a2, out a3);
        (Vector256.LoadUnsafe(ref sum, 8) + a0 + a1 + a2 + a3).StoreUnsafe(ref sum, 8);
        Turn(promised, came, w, w2, out a0, out a1, out a2, out a3);
        (Vector128.LoadUnsafe(ref sum, 12) + a0.GetLower() + a1.GetLower() + a2.GetLower() + a3.GetLower()).StoreUnsafe(ref sum, 12);
        AddCell(tally, z[0], a0);
        AddCell(tally, z[1], a1);
        AddCell(tally, z[2], a2);
        AddCell(tally, z[3], a3);
        for (int j = i; j < i + 4; j++)
            if (_alerts[j]) sums.AddAlert(_weights[j], _probabilities[j], _labels[j]);
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void AddCell(Tally tally, double logOdds, Vector256<double> contribution)
    {
        ref double cell = ref tally.Use(LogOddsBins.Of(logOdds));
        (Vector256.LoadUnsafe(ref cell) + contribution).StoreUnsafe(ref cell);
    }

    /// <summary>Turns four fields of four labels into four labels of four fields.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void Turn(
        Vector256<double> f0, Vector256<double> f1, Vector256<double> f2, Vector256<double> f3,
        out Vector256<double> l0, out Vector256<double> l1, out Vector256<double> l2, out Vector256<double> l3)
    {
        Vector256<double> even01 = Avx.UnpackLow(f0, f1), even23 = Avx.UnpackLow(f2, f3);
        Vector256<double> odd01 = Avx.UnpackHigh(f0, f1), odd23 = Avx.UnpackHigh(f2, f3);
        l0 = Avx.Permute2x128(even01, even23, 0x20);
        l1 = Avx.Permute2x128(odd01, odd23, 0x20);
        l2 = Avx.Permute2x128(even01, even23, 0x31);
        l3 = Avx.Permute2x128(odd01, odd23, 0x31);
    }

    /// <summary>Adds one label to sums and to the cell of its bin, with the same bits.</summary>
    public void AddTo(int i, ref LabelSums sums, Tally tally)
    {
        sums.Add(_logOdds[i], _weights[i], _labels[i], _probabilities[i], _logLosses[i], _baseRateLogLosses[i], _alerts[i]);
        double w = _weights[i];
        AddCell(tally, _logOdds[i], Vector256.Create(w * _probabilities[i], w * _labels[i], w, w * w));
    }

    /// <summary>Adds labels, from one place to before another, to the sums of the events that were scored when theirs were.</summary>
    public void AddTo(int first, int end, ref CohortSums sums)
    {
        // A copy, which stays in registers.
        var all = sums;
        for (int i = first; i < end; i++)
        {
            double w = _weights[i];
            all.Labelled += _standsFor[i];
            all.Weight += w;
            all.LogLoss += w * _logLosses[i];
            all.BaseRateLogLoss += w * _baseRateLogLosses[i];
            all.Probability += w * _probabilities[i];
            all.Positive += w * _labels[i];
        }
        sums = all;
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private void ComputeBaseRate<T>() where T : struct, ILanes<T>
    {
        // What lies behind the last label is computed and ignored, here and below.
        for (int i = 0; i < Count; i += T.Width)
            (T.Of(0) - LaneMath.Log(Load<T>(_baseRates, i))).Store(ref MemoryMarshal.GetArrayDataReference(_baseRateLogLosses), (nuint)i);
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private void ComputeLosses<T>() where T : struct, ILanes<T>
    {
        for (int i = 0; i < Count; i += T.Width)
        {
            T logOdds = Load<T>(_logOdds, i);
            T exp = LaneMath.Exp(T.Of(0) - T.Abs(logOdds));
            LaneMath.SigmoidOf(logOdds, exp).Store(ref MemoryMarshal.GetArrayDataReference(_probabilities), (nuint)i);
            LaneMath.SoftplusOf(Load<T>(_margins, i), exp).Store(ref MemoryMarshal.GetArrayDataReference(_logLosses), (nuint)i);
        }
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static T Load<T>(double[] values, int i) where T : struct, ILanes<T> =>
        T.Load(in MemoryMarshal.GetArrayDataReference(values), (nuint)i);

    private static Vector256<double> Load(double[] values, int i) =>
        Vector256.LoadUnsafe(ref MemoryMarshal.GetArrayDataReference(values), (nuint)i);
}
