using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Learning;

/// <summary>The blend on lanes of one width.</summary>
internal sealed class Blend<T> : Blend where T : struct, ILanes<T>
{
    // Below this a sum of probabilities is taken from logarithms, because its terms may have underflowed.
    private const double SmallestSum = 1e-280;

    // A place beyond the last setting is this much worse than the best setting.
    private const double NoSetting = 1e300;

    private readonly int _settingCount;
    private readonly double _switchRate;
    private readonly AlignedDoubles _weight;
    private readonly AlignedDoubles _share;
    private readonly AlignedDoubles _lossAboveBest;
    private readonly AlignedDoubles _logLossTotal;
    private readonly AlignedDoubles _brierTotal;
    private readonly AlignedDoubles _weightTotal;

    // Of the log-odds in _logOdds: e^-|z| and the probabilities of the labels 1 and 0, as long as _isCached.
    private readonly AlignedDoubles _logOdds;
    private readonly AlignedDoubles _exp;
    private readonly AlignedDoubles _probability;
    private readonly AlignedDoubles _complement;
    private readonly AlignedDoubles _loss;
    private AlignedDoubles _miss;
    private bool _isCached;

    public Blend(int settingCount, double switchRate)
    {
        int rowLength = RowWidth.Padded(settingCount);
        _settingCount = settingCount;
        _switchRate = switchRate;
        _weight = new AlignedDoubles(rowLength);
        _share = new AlignedDoubles(rowLength);
        _lossAboveBest = new AlignedDoubles(rowLength);
        _logLossTotal = new AlignedDoubles(rowLength);
        _brierTotal = new AlignedDoubles(rowLength);
        _weightTotal = new AlignedDoubles(rowLength);
        _logOdds = new AlignedDoubles(rowLength);
        _exp = new AlignedDoubles(rowLength);
        _probability = new AlignedDoubles(rowLength);
        _complement = new AlignedDoubles(rowLength);
        _loss = new AlignedDoubles(rowLength);
        _miss = _complement;
        _weight.Span[..settingCount].Fill(KeepsLosses ? 1 : 1.0 / settingCount);
        _share.Span[..settingCount].Fill(switchRate / settingCount);
        _lossAboveBest.Span[settingCount..].Fill(NoSetting);
    }

    public override bool KeepsLosses => _switchRate == 0;

    public override ReadOnlySpan<double> MissProbability => _miss.Span;

    public override double LogOdds(ReadOnlySpan<double> settingLogOdds)
    {
        ComputeProbabilities(settingLogOdds);
        double one = LaneSum.OfProducts<T>(in _weight.First, in _probability.First, (nuint)_weight.Length);
        double zero = LaneSum.OfProducts<T>(in _weight.First, in _complement.First, (nuint)_weight.Length);
        return one > SmallestSum && zero > SmallestSum
            ? LaneMath.LogOfNormal(new Lanes1(one)).Value - LaneMath.LogOfNormal(new Lanes1(zero)).Value
            : LogOfSum(1) - LogOfSum(-1);
    }

    public override void Learn(ReadOnlySpan<double> scoredLogOdds, int label, double weight)
    {
        if (!_isCached || !scoredLogOdds.SequenceEqual(_logOdds.Span[..scoredLogOdds.Length])) ComputeProbabilities(scoredLogOdds);
        AlignedDoubles hit = label == 1 ? _probability : _complement;
        _miss = label == 1 ? _complement : _probability;
        for (nuint lane = 0; lane < (nuint)_weight.Length; lane += (nuint)T.Width)
        {
            T logOdds = T.Load(in _logOdds.First, lane);
            T loss = LaneMath.SoftplusOf(label == 1 ? T.Of(0) - logOdds : logOdds, T.Load(in _exp.First, lane)) * T.Of(weight);
            T miss = T.Load(in _miss.First, lane);
            loss.Store(ref _loss.First, lane);
            (T.Load(in _logLossTotal.First, lane) + loss).Store(ref _logLossTotal.First, lane);
            (T.Load(in _brierTotal.First, lane) + T.Of(weight) * (miss * miss)).Store(ref _brierTotal.First, lane);
            (T.Load(in _weightTotal.First, lane) + T.Of(weight)).Store(ref _weightTotal.First, lane);
        }
        if (KeepsLosses) MoveExponentialWeights();
        else MoveFixedShare(hit, weight);
    }

    public override void TakeBack(ReadOnlySpan<double> scoredLogOdds, int label, double weight)
    {
        for (int setting = 0; setting < _settingCount; setting++)
        {
            double against = label == 1 ? -scoredLogOdds[setting] : scoredLogOdds[setting];
            double miss = Elementary.Sigmoid(against);
            _logLossTotal[setting] -= weight * Elementary.Softplus(against);
            _brierTotal[setting] -= weight * (miss * miss);
            _weightTotal[setting] -= weight;
        }
    }

    public override void Weights(Span<double> weights)
    {
        double total = 0;
        for (int setting = 0; setting < _settingCount; setting++) total += _weight[setting];
        for (int setting = 0; setting < _settingCount; setting++) weights[setting] = _weight[setting] / total;
    }

    public override void SetLogWeights(ReadOnlySpan<double> logWeights)
    {
        double greatest = double.NegativeInfinity, total = 0;
        foreach (double logWeight in logWeights) greatest = Math.Max(greatest, logWeight);
        for (int setting = 0; setting < _settingCount; setting++)
        {
            _lossAboveBest[setting] = greatest - logWeights[setting];
            _weight[setting] = Elementary.Exp(-_lossAboveBest[setting]);
            total += _weight[setting];
        }
        if (KeepsLosses) return;
        for (int setting = 0; setting < _settingCount; setting++) _weight[setting] /= total;
    }

    public override double LogLossTotal(int setting) => _logLossTotal[setting];

    public override double BrierTotal(int setting) => _brierTotal[setting];

    public override double WeightTotal(int setting) => _weightTotal[setting];

    public override void SaveSetting(int setting, Span<double> numbers)
    {
        numbers[0] = KeepsLosses ? _lossAboveBest[setting] : _weight[setting];
        numbers[1] = _logLossTotal[setting];
        numbers[2] = _brierTotal[setting];
        numbers[3] = _weightTotal[setting];
    }

    public override void LoadSetting(int setting, ReadOnlySpan<double> numbers)
    {
        if (KeepsLosses) _lossAboveBest[setting] = numbers[0];
        _weight[setting] = KeepsLosses ? Elementary.Exp(-numbers[0]) : numbers[0];
        _logLossTotal[setting] = numbers[1];
        _brierTotal[setting] = numbers[2];
        _weightTotal[setting] = numbers[3];
    }

    private void ComputeProbabilities(ReadOnlySpan<double> settingLogOdds)
    {
        settingLogOdds.CopyTo(_logOdds.Span);
        for (nuint lane = 0; lane < (nuint)_weight.Length; lane += (nuint)T.Width)
        {
            T logOdds = T.Load(in _logOdds.First, lane);
            T exp = LaneMath.ExpOfMinusAbs(logOdds);
            exp.Store(ref _exp.First, lane);
            LaneMath.SigmoidOf(logOdds, exp).Store(ref _probability.First, lane);
            LaneMath.SigmoidOf(T.Of(0) - logOdds, exp).Store(ref _complement.First, lane);
        }
        _isCached = true;
    }

    // Kept as losses: weights of settings that lag far behind underflow, but such a setting may come back.
    private void MoveExponentialWeights()
    {
        double best = double.PositiveInfinity;
        for (int setting = 0; setting < _settingCount; setting++)
        {
            _lossAboveBest[setting] += _loss[setting];
            best = Math.Min(best, _lossAboveBest[setting]);
        }
        for (nuint lane = 0; lane < (nuint)_weight.Length; lane += (nuint)T.Width)
        {
            T loss = T.Load(in _lossAboveBest.First, lane) - T.Of(best);
            loss.Store(ref _lossAboveBest.First, lane);
            LaneMath.Exp(T.Of(0) - loss).Store(ref _weight.First, lane);
        }
    }

    private void MoveFixedShare(AlignedDoubles hit, double weight)
    {
        double total = LaneSum.OfProducts<T>(in _weight.First, in hit.First, (nuint)_weight.Length);
        if (weight == 1 && total > SmallestSum)
        {
            Mix(in hit.First, total);
            return;
        }

        // The power of the probabilities, over its greatest, which keeps the sum away from 0.
        double least = double.PositiveInfinity;
        for (int setting = 0; setting < _settingCount; setting++) least = Math.Min(least, _loss[setting]);
        for (nuint lane = 0; lane < (nuint)_weight.Length; lane += (nuint)T.Width)
        {
            // Places beyond the last setting may be above the greatest.
            T exponent = T.Of(least) - T.Load(in _loss.First, lane);
            LaneMath.Exp(T.Select(T.Greater(exponent, T.Of(0)), T.Of(0), exponent)).Store(ref _loss.First, lane);
        }
        Mix(in _loss.First, LaneSum.OfProducts<T>(in _weight.First, in _loss.First, (nuint)_weight.Length));
    }

    private void Mix(ref readonly double likelihood, double total)
    {
        T keep = T.Of((1 - _switchRate) / total);
        for (nuint lane = 0; lane < (nuint)_weight.Length; lane += (nuint)T.Width)
        {
            T kept = T.Load(in _weight.First, lane) * T.Load(in likelihood, lane) * keep;
            (kept + T.Load(in _share.First, lane)).Store(ref _weight.First, lane);
        }
    }

    // ln of the weighted sum of sigmoid(sign * log-odds).
    private double LogOfSum(int sign)
    {
        double greatest = double.NegativeInfinity;
        for (int setting = 0; setting < _settingCount; setting++) greatest = Math.Max(greatest, LogOfTerm(setting, sign));
        double sum = 0;
        for (int setting = 0; setting < _settingCount; setting++) sum += Elementary.Exp(LogOfTerm(setting, sign) - greatest);
        return greatest + Elementary.Log(sum);
    }

    private double LogOfTerm(int setting, int sign)
    {
        double logWeight = KeepsLosses ? -_lossAboveBest[setting] : Elementary.Log(_weight[setting]);
        return logWeight - Elementary.Softplus(-sign * _logOdds[setting]);
    }
}
