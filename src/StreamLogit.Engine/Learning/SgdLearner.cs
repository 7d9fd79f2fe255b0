using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Learning;

/// <summary>Stochastic gradient descent on the log-loss, see <see cref="SgdSetting"/>.</summary>
internal sealed class SgdLearner<T> : SlotLearner<T> where T : struct, ILanes<T>
{
    private readonly StepSchedule<T> _schedule;
    private readonly AlignedDoubles _weightDecay;
    private readonly AlignedDoubles _isOvershootProof; // 1 or 0
    private readonly AlignedDoubles _learned;
    private readonly AlignedDoubles _move; // of the intercept at the label at hand, over the scale
    private readonly bool _scales;
    private readonly bool _isAnyOvershootProof;

    public SgdLearner(ReadOnlySpan<SgdSetting> settings, SlotBlocks blocks)
        : base(ReadOnlySpan<SettingOptions>.CastUp(settings), blocks, rowsPerSlot: 1)
    {
        _weightDecay = new AlignedDoubles(RowLength);
        _isOvershootProof = new AlignedDoubles(RowLength);
        _learned = new AlignedDoubles(RowLength);
        _move = new AlignedDoubles(RowLength);
        double[] steps = new double[settings.Length], decays = new double[settings.Length];
        for (int lane = 0; lane < settings.Length; lane++)
        {
            (steps[lane], decays[lane], _weightDecay[lane]) = settings[lane];
            _isOvershootProof[lane] = settings[lane].IsOvershootProof ? 1 : 0;
            _isAnyOvershootProof |= settings[lane].IsOvershootProof;
            _scales |= _weightDecay[lane] != 0;
        }
        _scales |= Forgetting.IsNeeded;
        _schedule = new StepSchedule<T>(RowLength, steps, decays);
    }

    public override int NumbersPerSetting => 3;

    public override void Learn(in EncodedVector x, in Lesson lesson)
    {
        if ((lesson.MissProbability.IsEmpty || _isAnyOvershootProof) && !lesson.IsScored) Score(in x, lesson.Offset);
        double squaredLength = _isAnyOvershootProof ? SquaredLength(in x) : 0;
        for (nuint lane = 0; lane < (nuint)RowLength; lane += (nuint)T.Width)
        {
            T k = T.Load(in _learned.First, lane) + T.Of(1);
            k.Store(ref _learned.First, lane);
            T step = _schedule.Step(lane, k);
            T move = step * T.Of(lesson.SignedWeight) * MissProbability(in lesson, lane);
            if (_isAnyOvershootProof) move = OvershootProof(in lesson, lane, step, squaredLength, move);
            (T.Load(in Intercepts.First, lane) + move).Store(ref Intercepts.First, lane);
            if (_scales) move *= T.Of(1) / Scale.Multiply(lane, Factor(in lesson, lane, step));
            move.Store(ref _move.First, lane);
        }
        AddMove(in x);
    }

    // On its own because the compiler keeps what lives across a call in memory, and nothing is called here.
    private void AddMove(in EncodedVector x)
    {
        ref double table = ref Table.First;
        ref int slots = ref MemoryMarshal.GetReference(x.Slots);
        ref double values = ref MemoryMarshal.GetReference(x.Values);
        nuint count = (nuint)x.Slots.Length;
        nuint length = (nuint)RowLength;
        for (nuint lane = 0; lane < length; lane += (nuint)T.Width)
        {
            T move = T.Load(in _move.First, lane);
            nuint i = 0;
            for (; i + 4 <= count; i += 4)
            {
                AddMove(ref table, ref slots, ref values, i, length, lane, move);
                AddMove(ref table, ref slots, ref values, i + 1, length, lane, move);
                AddMove(ref table, ref slots, ref values, i + 2, length, lane, move);
                AddMove(ref table, ref slots, ref values, i + 3, length, lane, move);
            }
            for (; i < count; i++) AddMove(ref table, ref slots, ref values, i, length, lane, move);
        }
    }

    // A slot may stand in the event twice, so each entry is stored before the next is loaded.
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void AddMove(ref double table, ref int slots, ref double values, nuint i, nuint length, nuint lane, T move)
    {
        nuint place = (nuint)(uint)Unsafe.Add(ref slots, i) * length + lane;
        (T.Load(in table, place) + move * T.Of(Unsafe.Add(ref values, i))).Store(ref table, place);
    }

    public override void SaveSetting(int lane, Span<double> numbers)
    {
        base.SaveSetting(lane, numbers);
        numbers[2] = _learned[lane];
    }

    public override void LoadSetting(int lane, ReadOnlySpan<double> numbers)
    {
        base.LoadSetting(lane, numbers);
        _learned[lane] = numbers[2];
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private T Factor(in Lesson lesson, nuint lane, T step)
    {
        T factor = T.Of(1) - step * T.Load(in _weightDecay.First, lane);
        factor = T.Select(T.Greater(factor, T.Of(0)), factor, T.Of(0));
        return Forgetting.IsNeeded ? factor * Forgetting.Factor(lane, lesson.ElapsedMicroseconds) : factor;
    }

    [MethodImpl(MethodImplOptions.NoInlining)]
    private T OvershootProof(in Lesson lesson, nuint lane, T step, double squaredLength, T move)
    {
        T distance = MarginMove.ByGradientFlow(Margin(in lesson, lane), step * T.Of(lesson.Weight * squaredLength));
        T proof = distance / T.Of(lesson.Label == 1 ? squaredLength : -squaredLength);
        return T.Select(T.Greater(T.Load(in _isOvershootProof.First, lane), T.Of(0)), proof, move);
    }

    // With the 1 of the intercept.
    private static double SquaredLength(in EncodedVector x)
    {
        double sum = 1;
        foreach (double value in x.Values) sum += value * value;
        return sum;
    }
}
