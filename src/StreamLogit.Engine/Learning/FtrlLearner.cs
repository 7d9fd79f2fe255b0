using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Learning;

/// <summary>FTRL-Proximal, see <see cref="FtrlSetting"/>. A slot has rows of coefficients w, of z and of n.</summary>
/// <remarks>
/// A setting that forgets has its coefficients pulled by the common scale; z then follows from w wherever w is not 0, by the definition of w.
/// Where a slot stands twice in an event, each entry is a gradient of its own.
/// </remarks>
internal sealed class FtrlLearner<T> : SlotLearner<T> where T : struct, ILanes<T>
{
    /// <summary>Rows of settings that a slot has.</summary>
    public const int SlotRows = 3;

    private readonly AlignedDoubles _step;
    private readonly AlignedDoubles _beta;
    private readonly AlignedDoubles _l1;
    private readonly AlignedDoubles _l2;
    private readonly AlignedDoubles _interceptZ;
    private readonly AlignedDoubles _interceptN;
    private readonly AlignedDoubles _gradient;

    public FtrlLearner(ReadOnlySpan<FtrlSetting> settings, SlotBlocks blocks)
        : base(ReadOnlySpan<SettingOptions>.CastUp(settings), blocks, SlotRows)
    {
        _step = new AlignedDoubles(RowLength);
        _beta = new AlignedDoubles(RowLength);
        _l1 = new AlignedDoubles(RowLength);
        _l2 = new AlignedDoubles(RowLength);
        _interceptZ = new AlignedDoubles(RowLength);
        _interceptN = new AlignedDoubles(RowLength);
        _gradient = new AlignedDoubles(RowLength);
        _step.Span.Fill(1);
        _beta.Span.Fill(1);
        for (int lane = 0; lane < settings.Length; lane++)
            (_step[lane], _beta[lane], _l1[lane], _l2[lane]) = settings[lane];
    }

    public override int NumbersPerSetting => 4;

    public override void Learn(in EncodedVector x, in Lesson lesson)
    {
        if (lesson.MissProbability.IsEmpty && !lesson.IsScored) Score(in x, lesson.Offset);
        for (nuint lane = 0; lane < (nuint)RowLength; lane += (nuint)T.Width)
        {
            // The gradient of the intercept; that of a coefficient is x times as much.
            T gradient = T.Of(-lesson.SignedWeight) * MissProbability(in lesson, lane);
            gradient.Store(ref _gradient.First, lane);
            LearnIntercept(lane, gradient);
            if (Forgetting.IsNeeded) Scale.Multiply(lane, Forgetting.Factor(lane, lesson.ElapsedMicroseconds));
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
        bool forgets = Forgetting.IsNeeded;
        for (nuint lane = 0; lane < length; lane += (nuint)T.Width)
        {
            Rule rule = RuleAt(lane);
            T gradient = T.Load(in _gradient.First, lane);
            T scale = Scale.At(lane);
            T isForgetting = Forgetting.Mask(lane);
            for (nuint i = 0; i < count; i++)
            {
                nuint place = (nuint)(uint)Unsafe.Add(ref slots, i) * (SlotRows * length) + lane;
                T w = scale * T.Load(in table, place);
                T z = T.Load(in table, place + length);
                T n = T.Load(in table, place + 2 * length);
                if (forgets) z = T.Select(isForgetting & T.Greater(T.Abs(w), T.Of(0)), rule.ZOf(w, n, w), z);
                w = rule.Move(ref z, ref n, w, gradient * T.Of(Unsafe.Add(ref values, i)));
                (forgets ? w / scale : w).Store(ref table, place);
                z.Store(ref table, place + length);
                n.Store(ref table, place + 2 * length);
            }
        }
    }

    public override void Pull(int slot, double left)
    {
        ref double table = ref Table.First;
        nuint length = (nuint)RowLength;
        for (nuint lane = 0; lane < length; lane += (nuint)T.Width)
        {
            nuint place = (nuint)slot * (SlotRows * length) + lane;
            T w = T.Load(in table, place);
            T pulled = w * T.Of(left);
            T z = T.Load(in table, place + length);
            T zOfPulled = RuleAt(lane).ZOf(Scale.At(lane) * pulled, T.Load(in table, place + 2 * length), w);
            pulled.Store(ref table, place);
            T.Select(T.Greater(T.Abs(w), T.Of(0)), zOfPulled, z).Store(ref table, place + length);
        }
    }

    public override void StartIntercept(int lane, double intercept)
    {
        base.StartIntercept(lane, intercept);
        _interceptZ[lane] = -intercept * (_beta[lane] / _step[lane]);
    }

    public override void StartCoefficient(int slot, int lane, double coefficient)
    {
        base.StartCoefficient(slot, lane, coefficient);
        Table.Rows(slot, 1)[RowLength + lane] =
            -coefficient * (_beta[lane] / _step[lane] + _l2[lane]) - Math.Sign(coefficient) * _l1[lane];
    }

    public override void SaveSetting(int lane, Span<double> numbers)
    {
        base.SaveSetting(lane, numbers);
        numbers[2] = _interceptZ[lane];
        numbers[3] = _interceptN[lane];
    }

    public override void LoadSetting(int lane, ReadOnlySpan<double> numbers)
    {
        base.LoadSetting(lane, numbers);
        _interceptZ[lane] = numbers[2];
        _interceptN[lane] = numbers[3];
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private Rule RuleAt(nuint lane) =>
        new(T.Load(in _step.First, lane), T.Load(in _beta.First, lane), T.Load(in _l1.First, lane), T.Load(in _l2.First, lane));

    private void LearnIntercept(nuint lane, T gradient)
    {
        T z = T.Load(in _interceptZ.First, lane);
        T n = T.Load(in _interceptN.First, lane);
        var free = new Rule(T.Load(in _step.First, lane), T.Load(in _beta.First, lane), T.Of(0), T.Of(0));
        free.Move(ref z, ref n, T.Load(in Intercepts.First, lane), gradient).Store(ref Intercepts.First, lane);
        z.Store(ref _interceptZ.First, lane);
        n.Store(ref _interceptN.First, lane);
    }

    private readonly struct Rule(T step, T beta, T l1, T l2)
    {
        /// <summary>Takes in a gradient and returns the new coefficient.</summary>
        [MethodImpl(MethodImplOptions.AggressiveInlining)]
        public T Move(ref T z, ref T n, T w, T g)
        {
            T sum = n + g * g;
            T root = T.Sqrt(sum);
            z = z + g - (root - T.Sqrt(n)) / step * w;
            n = sum;
            T penalty = T.Select(T.Greater(z, T.Of(0)), l1, T.Of(0) - l1);
            return T.Select(T.Greater(T.Abs(z), l1), (penalty - z) / Curvature(root), T.Of(0));
        }

        /// <summary>The z that belongs to a coefficient on one side of 0, however near.</summary>
        [MethodImpl(MethodImplOptions.AggressiveInlining)]
        public T ZOf(T w, T n, T side) =>
            T.Select(T.Greater(side, T.Of(0)), T.Of(0) - l1, l1) - w * Curvature(T.Sqrt(n));

        private T Curvature(T rootOfN) => (beta + rootOfN) / step + l2;
    }
}
