using StreamLogit.Engine.Definition;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Tests.Definition;

public sealed class StreamDefinitionReaderTests
{
    private const string Complete = """
        {
          // every section
          "stream": "quay-tickets",
          "record": {
            "id": "ticket.id", "time": "at", "timeFormat": "unix-milliseconds", "label": "outcome", "weight": "importance",
            "labelValues": { "stolen": 1, "paid": 0, "1": 1 }, "maxBytes": 4096, "maxDepth": 8,
          },
          "features": [
            { "number": "amount", "scale": "log1p" }, { "number": "age" }, { "number": "speed", "scale": "standard" },
            { "category": "country" }, { "category": [ "country", "channel" ] },
            { "cycle": "at", "period": "1d" }, { "cycle": "bearing", "period": 360 },
          ],
          "learning": {
            "slots": 1024, "hashSeed": 18446744073709551615, "startProbability": 0.01,
            "bank": [ { "update": "sgd", "step": [ 0.01, 0.1 ], "stepDecay": 0.25, "weightDecay": [ 0, 1e-6 ] } ],
            "publish": "sgd step=0.01 stepDecay=0.25 weightDecay=0", "switchRate": 0,
          },
          "labels": { "wait": "90m", "unlabelled": "negative" },
          "decision": { "cutoff": 0.2 },
          "health": { "windows": [ "1h", "2w" ], "lastLabels": 500 },
          "source": { "file": "in.csv", "follow": true },
          "scores": { "file": "/out/scores.jsonl", "labelled": false, "reasons": 5 },
          "rejects": { "file": "rejects.jsonl" },
          "state": { "folder": "state", "every": "2.5s", "everyEvents": 1e4 },
        }
        """;

    [Fact]
    public void Read_EveryKey_IsInTheDefinition()
    {
        var definition = Definitions.Read(Complete, use: DefinitionUse.Run);

        var engine = definition.Engine;
        Assert.Equal("quay-tickets", engine.Stream);
        Assert.Equal(("ticket.id", "at", TimeFormat.UnixMilliseconds), (engine.Record.Id, engine.Record.Time, engine.Record.TimeFormat));
        Assert.Equal(("outcome", "importance", 4096, 8), (engine.Record.Label, engine.Record.Weight, engine.Record.MaximumBytes, engine.Record.MaximumDepth));
        Assert.Equal(
            [("1", 1), ("paid", 0), ("stolen", 1)],
            engine.Record.LabelValues.OrderBy(pair => pair.Key, StringComparer.Ordinal).Select(pair => (pair.Key, pair.Value)));
        Assert.Equal(7, engine.Features.Length);
        Assert.Equal(new NumberFeature("amount", NumberScale.Log1p), engine.Features[0]);
        Assert.Equal(new NumberFeature("age", NumberScale.None), engine.Features[1]);
        Assert.Equal(new NumberFeature("speed", NumberScale.Standard), engine.Features[2]);
        Assert.Equal(["country"], Assert.IsType<CategoryFeature>(engine.Features[3]).Fields);
        Assert.Equal(["country", "channel"], Assert.IsType<CategoryFeature>(engine.Features[4]).Fields);
        Assert.Equal(new TimeCycleFeature(86_400_000_000, "1d"), engine.Features[5]);
        Assert.Equal(new NumberCycleFeature("bearing", 360), engine.Features[6]);
        Assert.Equal((1024, ulong.MaxValue, 0.0), (engine.Learning.Slots, engine.Learning.HashSeed, engine.Learning.SwitchRate));
        Assert.Equal(0.01, engine.Learning.StartProbability);
        Assert.Equal(
            [new SgdSetting(0.01, 0.25, 0), new SgdSetting(0.01, 0.25, 1e-6), new SgdSetting(0.1, 0.25, 0), new SgdSetting(0.1, 0.25, 1e-6)],
            engine.Learning.Bank);
        Assert.Equal("sgd step=0.01 stepDecay=0.25 weightDecay=0", engine.Learning.PublishedSetting);
        Assert.Equal(new LabelOptions { WaitMicroseconds = 90 * 60_000_000L, Unlabelled = UnlabelledEvents.Negative }, engine.Labels);
        Assert.Equal(new DecisionOptions { Cutoff = 0.2, PublishLabelled = false, Reasons = 5 }, engine.Decision);
        Assert.Equal([new HealthWindow("1h", 3_600_000_000), new HealthWindow("2w", 14 * 86_400_000_000)], engine.Health.Windows);
        Assert.Equal(500, engine.Health.LastLabels);
        Assert.Equal(new FileSourceOptions(Path.Combine(Definitions.Folder, "in.csv"), RecordingFormat.Csv, Follow: true), definition.Source);
        Assert.Equal(new FileOutputOptions("/out/scores.jsonl"), definition.Scores);
        Assert.Equal(new FileOutputOptions(Path.Combine(Definitions.Folder, "rejects.jsonl")), definition.Rejects);
        Assert.Equal(new StateOptions(Path.Combine(Definitions.Folder, "state"), 10_000, TimeSpan.FromSeconds(2.5)), definition.State);
    }

    [Fact]
    public void Read_SmallestDefinition_HasTheDefaults()
    {
        var definition = Definitions.Read(Definitions.Smallest);

        Assert.Equal(new LearningOptions { Bank = DefaultBank.DenseSettings }, definition.Engine.Learning);
        Assert.Equal(new LabelOptions(), definition.Engine.Labels);
        Assert.Equal(new DecisionOptions(), definition.Engine.Decision);
        Assert.Equal(new HealthOptions().Windows, definition.Engine.Health.Windows);
        Assert.Equal((null, null, null, null), (definition.Source, definition.Scores, definition.Rejects, definition.State));
    }

    [Fact]
    public void Read_SeveralErrors_AreAllReportedInOrder()
    {
        var errors = Definitions.Errors("""
            {
              "stream": "",
              "features": [ { "number": "amount", "scael": "log1p" }, { "categroy": "country" } ],
              "learning": { "slots": 1000 },
              "lables": { "wait": "30d" }
            }
            """);

        Assert.Equal(
            [
                """quay.json:2:13: stream: expected a string that is not empty, found the string "" """.TrimEnd(),
                """quay.json:3:39: features[0].scael: unknown key; did you mean "scale"? Known here: "number", "scale", "forget" """.TrimEnd(),
                """quay.json:3:59: features[1]: expected a feature with one of the keys "number", "category", "cycle", "history", "bucket", "text", found "categroy"; did you mean "category"?""",
                "quay.json:4:26: learning.slots: expected a power of two from 16 to 67108864, found the number 1000",
                """quay.json:5:3: lables: unknown key; did you mean "labels"? Known here: "$schema", "stream", "record", "features", "histories", "learning", "labels", "decision", "health", "kafka", "source", "scores", "rejects", "recording", "state", "listen", "webhook" """.TrimEnd(),
            ],
            errors.Select(error => error.ToString()));
    }
}
