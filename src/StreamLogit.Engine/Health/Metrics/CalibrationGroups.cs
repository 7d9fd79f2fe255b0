using System.Collections.Immutable;

namespace StreamLogit.Engine.Health.Metrics;

/// <summary>Takes score groups in ascending order together into calibration groups; numbers that never come make no group.</summary>
internal sealed class CalibrationGroups
{
    private readonly ImmutableArray<CalibrationGroup>.Builder _groups = ImmutableArray.CreateBuilder<CalibrationGroup>();
    private int _number = -1;
    private double _weight;
    private double _expected;
    private double _positive;
    private double _squaredWeight;

    public void Add(int number, in ScoreGroup group)
    {
        if (number != _number) Close();
        _number = number;
        _weight += group.Weight;
        _expected += group.Probability;
        _positive += group.Positive;
        _squaredWeight += group.SquaredWeight;
    }

    public ImmutableArray<CalibrationGroup> Take()
    {
        Close();
        return _groups.ToImmutable();
    }

    private void Close()
    {
        if (_weight > 0) _groups.Add(new CalibrationGroup(_weight, _expected, _positive, _weight * _weight / _squaredWeight));
        _weight = _expected = _positive = _squaredWeight = 0;
    }
}
