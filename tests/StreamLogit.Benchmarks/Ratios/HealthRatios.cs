using System.Globalization;
using System.Text;
using StreamLogit.Engine;
using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Benchmarks.Ratios;

/// <summary>
/// What counting health costs the engine: decoded events of 12 features, each with its label, through the engine with health on and off. Only
/// <see cref="ScoringEngine.Process"/> is timed.
/// </summary>
internal static class HealthRatios
{
    private const int Batches = 5;
    private const int EventsPerBatch = 2000;
    private const int Rounds = 600;

    /// <summary>Time with health over time without.</summary>
    /// <param name="eventsPerMinute">How many events share a minute of the stream's clock.</param>
    /// <param name="slices">Fields that health is told apart by.</param>
    public static double OnAgainstOff(int eventsPerMinute, params string[] slices)
    {
        Pass on = new(eventsPerMinute, slices, isOn: true), off = new(eventsPerMinute, slices, isOn: false);
        return Pairs.LeastRatio(on.Run, off.Run, Rounds);
    }

    private sealed class Pass
    {
        private readonly ScoringEngine _engine;
        private readonly RecordBatch[] _batches;
        private readonly ScoreBatch _scores;
        private readonly long _length;

        public Pass(int eventsPerMinute, string[] slices, bool isOn)
        {
            var definition = new EngineDefinition
            {
                Stream = "health",
                Record = new RecordOptions(),
                Features =
                [
                    new NumberFeature("n0", NumberScale.None), new NumberFeature("n1", NumberScale.None), new NumberFeature("n2", NumberScale.Standard),
                    new NumberFeature("n3", NumberScale.Standard), new NumberFeature("n4", NumberScale.Log1p), new NumberFeature("n5", NumberScale.None),
                    new CategoryFeature(["c0"]), new CategoryFeature(["c1"]), new CategoryFeature(["c2"]), new CategoryFeature(["c0", "c1"]),
                    new CategoryFeature(["c3"]), new TimeCycleFeature(86_400_000_000, "1d"),
                ],
                Learning = new LearningOptions { Bank = [new SgdSetting(0.01, 0, 1e-6)] },
                Health = new HealthOptions { Slices = [.. slices] },
            };
            _engine = new ScoringEngine(definition) { GiveReasons = false, CountsHealth = isOn };
            _scores = _engine.CreateScoreBatch();
            var decoder = new RecordDecoder(_engine.Schema);
            var random = new Random(1);
            long step = 60_000_000 / eventsPerMinute, time = 1_700_000_000_000_000;
            _length = step * Batches * EventsPerBatch;
            _batches = [.. Enumerable.Range(0, Batches).Select(_ =>
            {
                var batch = new RecordBatch(_engine.Schema);
                for (int i = 0; i < EventsPerBatch; i++, time += step) batch.Add(Encoding.UTF8.GetBytes(Record(random, time)), i);
                decoder.Decode(batch);
                return batch;
            })];
        }

        /// <summary>Processes all batches, and moves them on in time, so that the next run comes after this one.</summary>
        public void Run()
        {
            foreach (var batch in _batches)
            {
                _scores.Clear();
                _engine.Process(batch, _scores);
                foreach (ref var record in batch.Records)
                {
                    if (record.Kind == RecordKind.Reject) throw new InvalidOperationException("A record was rejected.");
                    record.TimeMicroseconds += _length;
                }
            }
        }

        private static string Record(Random random, long time)
        {
            double x = random.NextDouble(), y = random.NextDouble();
            int label = random.NextDouble() < 1 / (1 + Math.Exp(4 - 3 * x)) ? 1 : 0;
            return string.Create(CultureInfo.InvariantCulture,
                $"{{\"id\":\"e{random.Next()}\",\"time\":\"{DateTimeOffset.UnixEpoch.AddMicroseconds(time):yyyy-MM-ddTHH:mm:ss.ffffffZ}\",\"n0\":{x},\"n1\":{y},\"n2\":{x * y * 100},\"n3\":{random.Next(1000)},\"n4\":{random.Next(100000)},\"n5\":{random.NextDouble()},\"c0\":\"a{random.Next(5)}\",\"c1\":\"b{random.Next(50)}\",\"c2\":\"c{random.Next(1000)}\",\"c3\":\"d{random.Next(3)}\",\"label\":{label}}}");
        }
    }
}
