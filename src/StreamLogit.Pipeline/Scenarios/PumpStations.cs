using System.Text.Json;
using MathNet.Numerics.Distributions;
using MathNet.Numerics.Random;

namespace StreamLogit.Pipeline.Scenarios;

/// <summary>
/// Readings of twelve water pumps in turn. Bearings wear over weeks and are then renewed; whether the acoustic check of a reading finds
/// damage is drawn from a logistic model in vibration, temperature, speed and station. Midway the vibration sensor of one pump is replaced
/// by another make, which reads higher.
/// </summary>
internal sealed class PumpStations : IScenario
{
    /// <summary>Each of the twelve pumps once an hour.</summary>
    public const int DefaultEventsPerDay = 288;

    private const int PumpCount = 12;
    private const int ReplacedSensor = 4;
    private static readonly WeightedChoice Stations = new(("ashby", 0, 0), ("brook", 0, 0.5), ("cairn", 0, -0.4), ("dunmoor", 0, 0.9));
    private static readonly double[] Demand =
        [.35, .3, .28, .28, .32, .45, .7, .95, 1, .9, .8, .75, .78, .75, .7, .7, .75, .85, .95, 1, .9, .75, .6, .45];

    private readonly Xoshiro256StarStar _random;
    private readonly double _stepMilliseconds;
    private readonly Bearing[] _bearings = new Bearing[PumpCount];
    private long _count;
    private bool _changed;

    private int _pump;
    private double _vibration, _temperature, _speed, _flow, _pressure;
    private double _missing;

    public PumpStations(int eventsPerDay, int seed)
    {
        _random = new Xoshiro256StarStar(seed, threadSafe: false);
        _stepMilliseconds = ScenarioCalendar.MillisecondsPerDay / (double)eventsPerDay;
        for (int i = 0; i < PumpCount; i++)
        {
            long life = NextLifeMilliseconds();
            _bearings[i] = new Bearing(ScenarioCalendar.Start - (long)(_random.NextDouble() * life), life);
        }
    }

    public IReadOnlyList<string> Fields { get; } = ["station", "pump", "speed", "flow", "pressure", "bearing"];

    public double UnlabelledShare => 0.01;

    public void Change() => _changed = true;

    public ScenarioEvent Next()
    {
        long time = ScenarioCalendar.Start + (long)((_count + 0.8 * _random.NextDouble()) * _stepMilliseconds);
        _pump = (int)(_count++ % PumpCount);
        ref var bearing = ref _bearings[_pump];
        if (time - bearing.RenewedMilliseconds > bearing.LifeMilliseconds) bearing = new Bearing(time, NextLifeMilliseconds());
        double wear = (time - bearing.RenewedMilliseconds) / (double)bearing.LifeMilliseconds;

        double demand = Demand[ScenarioCalendar.HourOfDay(time)] * (ScenarioCalendar.DayOfWeek(time) < 5 ? 1 : 0.85);
        _speed = Math.Round(1000 + 480 * demand + Normal.Sample(_random, 0, 15));
        double load = _speed / 1480;
        _vibration = Math.Round(1.2 + 1.3 * load + 3.4 * wear * wear * wear + Math.Abs(Normal.Sample(_random, 0, 0.3)), 2);
        _temperature = Math.Round(
            36 + 14 * load + 15 * wear * wear - 3 * ScenarioCalendar.DailyCosine(time, 3) + Normal.Sample(_random, 0, 1.2), 1);
        _flow = Math.Round(0.12 * _speed * (1 - 0.06 * wear) + Normal.Sample(_random, 0, 2), 1);
        _pressure = Math.Round(5.4 * load * load * (1 - 0.04 * wear) + Normal.Sample(_random, 0, 0.08), 2);
        _missing = _random.NextDouble();

        double logOdds = -9.4
            + 2.4 * (_vibration - 2.6) + 0.22 * (_temperature - 52) - 0.004 * (_speed - 1300) + Stations.LogOdds(_pump / 3);
        return new ScenarioEvent(time, 1 / (1 + Math.Exp(-logOdds)));
    }

    public long LabelDelayMilliseconds() =>
        (long)(Math.Min(24, 1 + LogNormal.Sample(_random, 1.4, 0.6)) * ScenarioCalendar.MillisecondsPerHour);

    public void WriteFields(Utf8JsonWriter json)
    {
        json.WriteString("station"u8, Stations.Name(_pump / 3));
        json.WriteNumber("pump"u8, _pump + 1);
        json.WriteNumber("speed"u8, _speed);
        if (_missing is > 0.1 and < 0.115) json.WriteNull("flow"u8);
        else json.WriteNumber("flow"u8, _flow);
        if (_missing is < 0.2 or > 0.205) json.WriteNumber("pressure"u8, _pressure);
        json.WriteStartObject("bearing"u8);
        if (_missing is > 0.3 and < 0.305) json.WriteNull("vibration"u8);
        else json.WriteNumber("vibration"u8, _changed && _pump == ReplacedSensor ? Math.Round(1.2 * _vibration + 1.5, 2) : _vibration);
        if (_missing is < 0.4 or > 0.41) json.WriteNumber("temperature"u8, _temperature);
        json.WriteEndObject();
    }

    public void WriteLabel(Utf8JsonWriter json, bool isBad) => json.WriteBooleanValue(isBad);

    private long NextLifeMilliseconds() => (long)(ContinuousUniform.Sample(_random, 16, 40) * ScenarioCalendar.MillisecondsPerDay);

    private readonly record struct Bearing(long RenewedMilliseconds, long LifeMilliseconds);
}
