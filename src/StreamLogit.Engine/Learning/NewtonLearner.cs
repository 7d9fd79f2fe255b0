using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Learning;

/// <summary>
/// The recursive second-order rule, see <see cref="NewtonSetting"/>. The covariance is kept as P = U D U' with U unit upper triangular and
/// D diagonal, and updated in that form (Bierman, Factorization Methods for Discrete Sequential Estimation, 1977, chapter V), so that rounding
/// can never make it indefinite.
/// </summary>
/// <remarks>
/// Coefficient i of the rule is slot FirstDenseSlot + i; the intercept is the last. Each number is a row of settings. Column j of U is stored
/// above its diagonal, from row j (j - 1) / 2 on. An update takes time and memory in proportion to the square of the coefficients.
/// </remarks>
internal sealed class NewtonLearner<T> : ILearner where T : struct, ILanes<T>
{
    private const double PiOver8 = Math.PI / 8;

    // No variance becomes 0, from which nothing could be learned any more.
    private const double SmallestVariance = 1e-40;

    private readonly int _firstSlot;
    private readonly int _size;
    private readonly AlignedDoubles _priorVariance;
    private readonly AlignedDoubles _inverseFactor;
    private readonly AlignedDoubles _mean;
    private readonly AlignedDoubles _variance;
    private readonly AlignedDoubles _upper;
    private readonly AlignedDoubles _dense; // x
    private readonly int[] _indices; // where it is not 0
    private readonly AlignedDoubles _projection; // U'x
    private readonly AlignedDoubles _gain; // Px
    private readonly AlignedDoubles _logOdds;
    private readonly Forgetting<T> _forgetting;
    private int _count; // entries in _indices

    /// <exception cref="ArgumentException">There are no dense slots, or too many.</exception>
    public NewtonLearner(ReadOnlySpan<NewtonSetting> settings, int firstDenseSlot, int slotCount)
    {
        int dense = slotCount - firstDenseSlot;
        if (dense is < 1 or > NewtonSetting.MostDenseCoefficients)
            throw new ArgumentException(
                $"The update rule newton needs 1 to {NewtonSetting.MostDenseCoefficients} dense coefficients (of numbers and cycles), and there are {dense}.");
        _firstSlot = firstDenseSlot;
        _size = dense + 1;
        RowLength = RowWidth.Padded(settings.Length);
        _priorVariance = new AlignedDoubles(RowLength);
        _inverseFactor = new AlignedDoubles(RowLength);
        _mean = new AlignedDoubles(_size * RowLength);
        _variance = new AlignedDoubles(_size * RowLength);
        _upper = new AlignedDoubles(_size * (_size - 1) / 2 * RowLength);
        _dense = new AlignedDoubles(dense);
        _indices = new int[_size];
        _projection = new AlignedDoubles(_size * RowLength);
        _gain = new AlignedDoubles(_size * RowLength);
        _logOdds = new AlignedDoubles(RowLength);
        _forgetting = new Forgetting<T>(RowLength, ReadOnlySpan<SettingOptions>.CastUp(settings));
        _priorVariance.Span.Fill(1);
        _inverseFactor.Span.Fill(1);
        for (int lane = 0; lane < settings.Length; lane++)
        {
            _priorVariance[lane] = settings[lane].PriorVariance;
            _inverseFactor[lane] = 1 / settings[lane].ForgettingFactor;
        }
        for (int i = 0; i < _variance.Length; i++) _variance[i] = _priorVariance[i % RowLength];
    }

    public int RowLength { get; }

    public ReadOnlySpan<double> LogOdds => _logOdds.Span;

    public int RowsPerSlot => 0;

    public int NumbersPerSetting => 2 + 2 * _size - 1 + _size * (_size - 1) / 2;

    public void Score(in EncodedVector x, double offset)
    {
        CopyDense(in x);
        for (nuint lane = 0; lane < (nuint)RowLength; lane += (nuint)T.Width)
        {
            T z = Project(lane, offset, out T variance);
            (z / T.Sqrt(T.Of(1) + T.Of(PiOver8) * variance)).Store(ref _logOdds.First, lane);
        }
    }

    public void Learn(in EncodedVector x, in Lesson lesson)
    {
        CopyDense(in x);
        for (nuint lane = 0; lane < (nuint)RowLength; lane += (nuint)T.Width)
        {
            Forget(lane, lesson.ElapsedMicroseconds);
            T z = Project(lane, lesson.Offset, out T variance);
            T margin = lesson.Label == 1 ? z : T.Of(0) - z;
            T atMode = margin + MarginMove.ByProximalStep(margin, variance * T.Of(lesson.Weight));
            T exp = LaneMath.ExpOfMinusAbs(atMode);
            T miss = LaneMath.SigmoidOf(T.Of(0) - atMode, exp);
            T precision = T.Of(lesson.Weight) * miss * LaneMath.SigmoidOf(atMode, exp);
            UpdateCovariance(lane, precision);
            MoveMean(lane, T.Of(lesson.SignedWeight) * miss);
        }
    }

    public void AddCoefficients(in EncodedVector x, ReadOnlySpan<double> settingWeights, Span<double> coefficients)
    {
        for (int i = 0; i < x.Slots.Length; i++)
        {
            if (!TryIndex(x.Slots[i], out int index)) continue;
            coefficients[i] += LaneSum.OfProducts<T>(
                in MemoryMarshal.GetReference(settingWeights), in _mean[index * RowLength], (nuint)RowLength);
        }
    }

    public void Pull(int slot, double left)
    {
        if (!TryIndex(slot, out int index)) return;
        for (int lane = 0; lane < RowLength; lane++) _mean[index * RowLength + lane] *= left;
    }

    public double Intercept(int lane) => _mean[(_size - 1) * RowLength + lane];

    public double Coefficient(int slot, int lane) => TryIndex(slot, out int index) ? _mean[index * RowLength + lane] : 0;

    public long NonZeroCount(int lane)
    {
        long count = 0;
        for (int i = 0; i < _size - 1; i++)
            if (_mean[i * RowLength + lane] != 0) count++;
        return count;
    }

    public void StartIntercept(int lane, double intercept) => _mean[(_size - 1) * RowLength + lane] = intercept;

    public void StartCoefficient(int slot, int lane, double coefficient)
    {
        if (TryIndex(slot, out int index)) _mean[index * RowLength + lane] = coefficient;
    }

    public Span<double> Rows(int slot, int count) => [];

    public void SaveSetting(int lane, Span<double> numbers)
    {
        numbers[0] = Intercept(lane);
        numbers[1] = 1;
        numbers = numbers[2..];
        for (int i = 0; i < _size - 1; i++) numbers[i] = _mean[i * RowLength + lane];
        numbers = numbers[(_size - 1)..];
        for (int i = 0; i < _size; i++) numbers[i] = _variance[i * RowLength + lane];
        numbers = numbers[_size..];
        for (int i = 0; i < numbers.Length; i++) numbers[i] = _upper[i * RowLength + lane];
    }

    public void LoadSetting(int lane, ReadOnlySpan<double> numbers)
    {
        StartIntercept(lane, numbers[0]);
        numbers = numbers[2..];
        for (int i = 0; i < _size - 1; i++) _mean[i * RowLength + lane] = numbers[i];
        numbers = numbers[(_size - 1)..];
        for (int i = 0; i < _size; i++) _variance[i * RowLength + lane] = numbers[i];
        numbers = numbers[_size..];
        for (int i = 0; i < numbers.Length; i++) _upper[i * RowLength + lane] = numbers[i];
    }

    private bool TryIndex(int slot, out int index)
    {
        index = slot - _firstSlot;
        return (uint)index < (uint)(_size - 1);
    }

    private nuint Place(int index, nuint lane) => (nuint)(index * RowLength) + lane;

    private static int Column(int j) => j * (j - 1) / 2;

    // The entries of x that this rule sees, in the order of their indices; the last is the 1 of the intercept.
    private void CopyDense(in EncodedVector x)
    {
        _dense.Span.Clear();
        for (int i = 0; i < x.Slots.Length; i++)
            if (TryIndex(x.Slots[i], out int index)) _dense[index] += x.Values[i];
        _count = 0;
        for (int i = 0; i < _dense.Length; i++)
            if (_dense[i] != 0) _indices[_count++] = i;
        _indices[_count++] = _size - 1;
    }

    // Computes U'x and returns the log-odds with their variance x'Px. Before the first index U'x is 0.
    [MethodImpl(MethodImplOptions.NoInlining)]
    private T Project(nuint lane, double offset, out T variance)
    {
        int last = _size - 1;
        T z = T.Load(in _mean.First, Place(last, lane)) + T.Of(offset);
        for (int k = 0; k < _count - 1; k++)
            z += T.Load(in _mean.First, Place(_indices[k], lane)) * T.Of(_dense[_indices[k]]);

        variance = T.Of(0);
        for (int j = _indices[0], before = 0; j <= last; j++)
        {
            bool isEntry = _indices[before] == j;
            T f = T.Of(!isEntry ? 0 : j == last ? 1 : _dense[j]);
            int column = Column(j);
            for (int k = 0; k < before; k++)
                f += T.Load(in _upper.First, Place(column + _indices[k], lane)) * T.Of(_dense[_indices[k]]);
            f.Store(ref _projection.First, Place(j, lane));
            variance += T.Load(in _variance.First, Place(j, lane)) * f * f;
            if (isEntry) before++;
        }
        return z;
    }

    // P^-1 <- P^-1 + precision x x', and into _gain the product of the P before and x.
    [MethodImpl(MethodImplOptions.NoInlining)]
    private void UpdateCovariance(nuint lane, T precision)
    {
        for (int i = 0; i < _indices[0]; i++) T.Of(0).Store(ref _gain.First, Place(i, lane));
        T alpha = T.Of(1);
        for (int j = _indices[0]; j < _size; j++)
        {
            nuint place = Place(j, lane);
            T f = T.Load(in _projection.First, place);
            T variance = T.Load(in _variance.First, place);
            T v = variance * f;
            T scaled = precision * f;
            T nextAlpha = alpha + scaled * v;
            T reduced = variance * (alpha / nextAlpha);
            T.Select(T.Greater(reduced, T.Of(SmallestVariance)), reduced, T.Of(SmallestVariance)).Store(ref _variance.First, place);
            UpdateColumn(lane, j, T.Of(0) - scaled / alpha, v);
            v.Store(ref _gain.First, place);
            alpha = nextAlpha;
        }
    }

    [MethodImpl(MethodImplOptions.NoInlining)]
    private void UpdateColumn(nuint lane, int j, T factor, T v)
    {
        ref double upper = ref _upper.First;
        ref double gain = ref _gain.First;
        nuint stride = (nuint)RowLength;
        nuint upperPlace = Place(Column(j), lane);
        nuint gainPlace = lane;
        for (int i = 0; i < j; i++, upperPlace += stride, gainPlace += stride)
        {
            T u = T.Load(in upper, upperPlace);
            T b = T.Load(in gain, gainPlace);
            (u + factor * b).Store(ref upper, upperPlace);
            (b + u * v).Store(ref gain, gainPlace);
        }
    }

    [MethodImpl(MethodImplOptions.NoInlining)]
    private void MoveMean(nuint lane, T gradient)
    {
        for (int i = 0; i < _size; i++)
        {
            nuint place = Place(i, lane);
            (T.Load(in _mean.First, place) + gradient * T.Load(in _gain.First, place)).Store(ref _mean.First, place);
        }
    }

    [MethodImpl(MethodImplOptions.NoInlining)]
    private void Forget(nuint lane, double elapsedMicroseconds)
    {
        T inverse = T.Load(in _inverseFactor.First, lane);
        if (_forgetting.IsNeeded)
        {
            T factor = _forgetting.Factor(lane, elapsedMicroseconds);
            for (int i = 0; i < _size - 1; i++)
            {
                nuint place = Place(i, lane);
                (T.Load(in _mean.First, place) * factor).Store(ref _mean.First, place);
            }
            inverse = inverse / factor / factor;
        }
        T prior = T.Load(in _priorVariance.First, lane);
        for (int i = 0; i < _size; i++)
        {
            nuint place = Place(i, lane);
            T variance = T.Load(in _variance.First, place) * inverse;
            T.Select(T.Greater(variance, prior), prior, variance).Store(ref _variance.First, place);
        }
    }
}
