namespace StreamLogit.Engine.Health.Detection;

/// <summary>What came since a CUSUM last left 0. Plain data, so that it can be saved.</summary>
internal struct ShiftCounts
{
    public OddsShiftCusum Cusum;
    public double Labels;
    public double Positives;
    public double Probability;
    public long Fired;
}
