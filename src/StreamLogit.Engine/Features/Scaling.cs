using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Features;

/// <summary>Scales the numbers of one feature, where asked by what it has seen of them before.</summary>
internal sealed class Scaling(NumberScale scale)
{
    // A first outlier after a long constant would otherwise be divided by next to nothing.
    private const double LargestStandardised = 1e6;

    private readonly QuantileSketch? _quantiles = scale == NumberScale.Rank ? new QuantileSketch() : null;
    private readonly bool _isStandard = scale is NumberScale.Standard or NumberScale.StandardLog1p;
    private RunningMoments _moments;

    /// <summary>The scaled value of a number, which is taken in afterwards.</summary>
    public double Next(double number)
    {
        if (scale is NumberScale.Log1p or NumberScale.StandardLog1p) number = Math.CopySign(Elementary.Log1p(Math.Abs(number)), number);
        double scaled = Scaled(number);
        if (_isStandard) _moments.Add(number);
        _quantiles?.Add(number);
        return scaled;
    }

    public void Save(BinaryWriter writer)
    {
        _quantiles?.Save(writer);
        if (!_isStandard) return;
        writer.Write(_moments.Count);
        writer.Write(_moments.Mean);
        writer.Write(_moments.SumOfSquares);
    }

    public void Load(BinaryReader reader)
    {
        _quantiles?.Load(reader);
        if (!_isStandard) return;
        _moments.Count = reader.ReadInt64();
        _moments.Mean = reader.ReadDouble();
        _moments.SumOfSquares = reader.ReadDouble();
    }

    private double Scaled(double number) => scale switch
    {
        NumberScale.None or NumberScale.Log1p => number,
        NumberScale.Standard or NumberScale.StandardLog1p => Standardised(number),
        NumberScale.Rank => 2 * _quantiles!.ShareBelow(number) - 1,
        _ => throw new InvalidOperationException($"{scale} is no scale of a number"),
    };

    /// <summary>0 until two events have shown a spread.</summary>
    private double Standardised(double number)
    {
        double variance = _moments.Variance;
        if (!(variance > 0)) return 0;
        return Math.Clamp((number - _moments.Mean) / Math.Sqrt(variance), -LargestStandardised, LargestStandardised);
    }
}
