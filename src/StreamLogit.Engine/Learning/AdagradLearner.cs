using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Learning;

/// <summary>AdaGrad, with or without forgetting, see <see cref="AdagradSetting"/>. A slot has a row of coefficients and one of sums of squares.</summary>
/// <remarks>Where a slot stands twice in an event, each entry is a gradient of its own.</remarks>
internal sealed class AdagradLearner<T> : SlotLearner<T> where T : struct, ILanes<T>
{
    /// <summary>Rows of settings that a slot has.</summary>
    public const int SlotRows = 2;

    // The delta of the published form: it only keeps 0 / 0 away.
    private const double SmallestRoot = 1e-8;

    private readonly AlignedDoubles _step;
    private readonly AlignedDoubles _sumFactor;
    private readonly AlignedDoubles _interceptSum;
    private readonly AlignedDoubles _gradient;
    private readonly LazyScale<T> _sumScale;
    private readonly bool _sumsForget;

    public AdagradLearner(ReadOnlySpan<AdagradSetting> settings, SlotBlocks blocks)
        : base(ReadOnlySpan<SettingOptions>.CastUp(settings), blocks, SlotRows)
    {
        _step = new AlignedDoubles(RowLength);
        _sumFactor = new AlignedDoubles(RowLength);
        _interceptSum = new AlignedDoubles(RowLength);
        _gradient = new AlignedDoubles(RowLength);
        _sumScale = new LazyScale<T>(Table, blocks, RowLength, row: 1);
        _sumFactor.Span.Fill(1);
        for (int lane = 0; lane < settings.Length; lane++)
        {
            _step[lane] = settings[lane].Step;
            double halfLife = settings[lane].SumHalfLifeLabels;
            if (halfLife == 0) continue;
            _sumFactor[lane] = Elementary.Exp(-Elementary.Ln2 / halfLife);
            _sumsForget = true;
        }
    }

    public override int NumbersPerSetting => 4;

    public override void Learn(in EncodedVector x, in Lesson lesson)
    {
        if (lesson.MissProbability.IsEmpty && !lesson.IsScored) Score(in x, lesson.Offset);
        for (nuint lane = 0; lane < (nuint)RowLength; lane += (nuint)T.Width)
        {
            // The negative gradient of the intercept; that of a coefficient is x times as much.
            T gradient = T.Of(lesson.SignedWeight) * MissProbability(in lesson, lane);
            gradient.Store(ref _gradient.First, lane);
            T step = T.Load(in _step.First, lane);
            T sumFactor = T.Load(in _sumFactor.First, lane);
            T sum = T.Load(in _interceptSum.First, lane) * sumFactor + gradient * gradient;
            sum.Store(ref _interceptSum.First, lane);
            (T.Load(in Intercepts.First, lane) + step * gradient / (T.Of(SmallestRoot) + T.Sqrt(sum))).Store(ref Intercepts.First, lane);
            if (Forgetting.IsNeeded) Scale.Multiply(lane, Forgetting.Factor(lane, lesson.ElapsedMicroseconds));
            if (_sumsForget) _sumScale.Multiply(lane, sumFactor);
        }
        LearnCoefficients(in x);
    }

    // On its own because the compiler keeps what lives across a call in memory, and nothing is called here.
    private void LearnCoefficients(in EncodedVector x)
    {
        ref double table = ref Table.First;
        ref int slots = ref MemoryMarshal.GetReference(x.Slots);
        ref double values = ref MemoryMarshal.GetReference(x.Values);
        nuint count = (nuint)x.Slots.Length;
        nuint length = (nuint)RowLength;
        for (nuint lane = 0; lane < length; lane += (nuint)T.Width)
        {
            T gradient = T.Load(in _gradient.First, lane);
            T sumScale = _sumScale.At(lane);
            T step = T.Load(in _step.First, lane) / Scale.At(lane);
            T inverseSumScale = T.Of(1) / sumScale;
            for (nuint i = 0; i < count; i++)
            {
                nuint place = (nuint)(uint)Unsafe.Add(ref slots, i) * (SlotRows * length) + lane;
                T g = gradient * T.Of(Unsafe.Add(ref values, i));
                T sum = T.Load(in table, place + length) + g * g * inverseSumScale;
                sum.Store(ref table, place + length);
                T root = T.Of(SmallestRoot) + T.Sqrt(sumScale * sum);
                (T.Load(in table, place) + step * g / root).Store(ref table, place);
            }
        }
    }

    public override void SaveSetting(int lane, Span<double> numbers)
    {
        base.SaveSetting(lane, numbers);
        numbers[2] = _interceptSum[lane];
        numbers[3] = _sumScale[lane];
    }

    public override void LoadSetting(int lane, ReadOnlySpan<double> numbers)
    {
        base.LoadSetting(lane, numbers);
        _interceptSum[lane] = numbers[2];
        _sumScale[lane] = numbers[3];
    }
}
