using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Learning;

/// <summary>The blend of a bank with one setting: nothing to weigh, only losses to add up.</summary>
/// <remarks>
/// The logarithms of eight labels are taken at once, because a single one takes as long; they are added one after the other all the same, so
/// that the totals do not depend on when they are asked for.
/// </remarks>
internal sealed class SingleSetting(bool keepsLosses, int widestLanes) : Blend
{
    private const int Most = RowWidth.Widest;
    private readonly int _lanes = RowWidth.Lanes(Most, widestLanes);
    private readonly AlignedDoubles _againstLabel = new AlignedDoubles(Most);
    private readonly AlignedDoubles _exp = new AlignedDoubles(Most);
    private readonly AlignedDoubles _weight = new AlignedDoubles(Most);
    private readonly AlignedDoubles _loss = new AlignedDoubles(Most);
    private readonly AlignedDoubles _miss = new AlignedDoubles(1);
    private int _waiting;
    private double _logLossTotal;
    private double _brierTotal;
    private double _weightTotal;

    public override ReadOnlySpan<double> MissProbability => _miss.Span;

    public override bool KeepsLosses => keepsLosses;

    public override double LogOdds(ReadOnlySpan<double> settingLogOdds) => settingLogOdds[0];

    public override void Learn(ReadOnlySpan<double> scoredLogOdds, int label, double weight)
    {
        // Without a branch on the label, which nobody could predict.
        var againstLabel = new Lanes1(scoredLogOdds[0] * (1 - 2 * label));
        Lanes1 exp = LaneMath.ExpOfMinusAbs(againstLabel);
        double miss = LaneMath.SigmoidOf(againstLabel, exp).Value;
        _miss[0] = miss;
        _brierTotal += weight * (miss * miss);
        _weightTotal += weight;
        int place = _waiting;
        _againstLabel[place] = againstLabel.Value;
        _exp[place] = exp.Value;
        _weight[place] = weight;
        _waiting = place + 1;
        if (_waiting == Most) AddLosses();
    }

    public override void TakeBack(ReadOnlySpan<double> scoredLogOdds, int label, double weight)
    {
        AddLosses();
        double against = label == 1 ? -scoredLogOdds[0] : scoredLogOdds[0];
        double miss = Elementary.Sigmoid(against);
        _logLossTotal -= weight * Elementary.Softplus(against);
        _brierTotal -= weight * (miss * miss);
        _weightTotal -= weight;
    }

    public override void Weights(Span<double> weights) => weights[0] = 1;

    public override void SetLogWeights(ReadOnlySpan<double> logWeights)
    {
    }

    public override double LogLossTotal(int setting)
    {
        AddLosses();
        return _logLossTotal;
    }

    public override double BrierTotal(int setting) => _brierTotal;

    public override double WeightTotal(int setting) => _weightTotal;

    public override void SaveSetting(int setting, Span<double> numbers)
    {
        numbers[0] = keepsLosses ? 0 : 1;
        numbers[1] = LogLossTotal(setting);
        numbers[2] = _brierTotal;
        numbers[3] = _weightTotal;
    }

    public override void LoadSetting(int setting, ReadOnlySpan<double> numbers) =>
        (_logLossTotal, _brierTotal, _weightTotal) = (numbers[1], numbers[2], numbers[3]);

    private void AddLosses()
    {
        switch (_lanes)
        {
            case 8:
                ComputeLosses<Lanes8>();
                break;
            case 4:
                ComputeLosses<Lanes4>();
                break;
            case 2:
                ComputeLosses<Lanes2>();
                break;
            default:
                ComputeLosses<Lanes1>();
                break;
        }
        for (int i = 0; i < _waiting; i++) _logLossTotal += _loss[i];
        _waiting = 0;
    }

    private void ComputeLosses<T>() where T : struct, ILanes<T>
    {
        for (nuint lane = 0; lane < Most; lane += (nuint)T.Width)
        {
            T loss = LaneMath.SoftplusOf(T.Load(in _againstLabel.First, lane), T.Load(in _exp.First, lane));
            (loss * T.Load(in _weight.First, lane)).Store(ref _loss.First, lane);
        }
    }
}
