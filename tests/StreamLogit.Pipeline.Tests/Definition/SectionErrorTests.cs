using StreamLogit.Pipeline.Definition;

namespace StreamLogit.Pipeline.Tests.Definition;

/// <summary>What each section refuses, and what it says.</summary>
public sealed class SectionErrorTests
{
    [Theory]
    [InlineData("\"record\": []", "2:11: record: expected an object, found a list")]
    [InlineData("\"record\": { \"id\": 5 }", "2:19: record.id: expected a string, found the number 5")]
    [InlineData("\"record\": { \"time\": null }", "2:21: record.time: expected a string, found null")]
    [InlineData("\"record\": { \"label\": \"\" }", "2:22: record.label: expected a string that is not empty, found the string \"\"")]
    [InlineData("\"record\": { \"weight\": \"a..b\" }", "2:23: record.weight: expected the path of a field, nested names joined by single dots, as \"payment.amount\", found the string \"a..b\"")]
    [InlineData("\"record\": { \"timeFormat\": \"rfc-3339\" }", "2:27: record.timeFormat: expected one of \"rfc3339\", \"unix-seconds\", \"unix-milliseconds\", found the string \"rfc-3339\"; did you mean \"rfc3339\"?")]
    [InlineData("\"record\": { \"maxBytes\": 63 }", "2:25: record.maxBytes: expected a whole number from 64 to 67108864, found the number 63")]
    [InlineData("\"record\": { \"maxBytes\": 67108865 }", "2:25: record.maxBytes: expected a whole number from 64 to 67108864, found the number 67108865")]
    [InlineData("\"record\": { \"maxDepth\": 2.5 }", "2:25: record.maxDepth: expected a whole number from 1 to 256, found the number 2.5")]
    [InlineData("\"record\": { \"maxDepth\": 0 }", "2:25: record.maxDepth: expected a whole number from 1 to 256, found the number 0")]
    [InlineData("\"record\": { \"id\": \"k\", \"label\": \"k\" }", "2:33: record.label: the field \"k\" is already that of \"id\": name another")]
    [InlineData("\"record\": { \"labelTime\": \"time\" }", "2:26: record.labelTime: the field \"time\" is already that of \"time\": name another")]
    [InlineData("\"record\": { \"id\": \"time\" }", "2:19: record.id: the field \"time\" is already that of \"time\": name another")]
    [InlineData("\"record\": { \"labelValues\": {} }", "2:28: record.labelValues: no value means 1: name the values of bad events, as { \"fraud\": 1, \"paid\": 0 }",
        "2:28: record.labelValues: no value means 0: name the values of good events, or set labels.unlabelled to \"negative\"")]
    [InlineData("\"record\": { \"labelValues\": { \"bad\": 1 } }", "2:28: record.labelValues: no value means 0: name the values of good events, or set labels.unlabelled to \"negative\"")]
    [InlineData("\"record\": { \"labelValues\": { \"bad\": 1, \"good\": 2 } }", "2:48: record.labelValues.good: expected a whole number from 0 to 1, found the number 2")]
    [InlineData("\"record\": { \"labelValues\": { \"1\": 1, \"1.0\": 0 } }", "2:45: record.labelValues[\"1.0\"]: the same number as \"1\", which means 1: a number has one meaning")]
    [InlineData("\"record\": { \"labelValues\": { \"a\": 1, \"b\": 0, \"a\": 1 } }", "2:46: record.labelValues.a: the key is there twice, before at quay.json:2:30: keep one")]
    [InlineData("\"record\": { \"zone\": \"1d\" }", "2:13: record.zone: unknown key. Known here: \"id\", \"time\", \"timeFormat\", \"label\", \"labelTime\", \"weight\", \"labelValues\", \"maxBytes\", \"maxDepth\", \"ahead\"")]
    public void Record_Wrong_IsRefused(string keys, params string[] expected) => AssertErrors(keys, expected);

    [Theory]
    [InlineData("null", "2:1: features: expected a list of features, at least one, found null")]
    [InlineData("[]", "2:1: features: expected a list of features, at least one, found a list")]
    [InlineData("[ 5 ]", "2:3: features[0]: expected an object, found the number 5")]
    [InlineData("[ {} ]", "2:3: features[0]: expected a feature with one of the keys \"number\", \"category\", \"cycle\", \"history\", \"bucket\", \"text\", found no key at all")]
    [InlineData("[ { \"history\": \"count\", \"per\": \"card\" } ]", "2:3: features[0]: the key \"halfLife\" is missing: the time in which the weight of an event halves, as \"1h\", or a list of them")]
    [InlineData("[ { \"number\": \"a\", \"category\": \"b\" } ]", "2:3: features[0]: has both \"number\" and \"category\", which are two kinds of feature: write one feature each")]
    [InlineData("[ { \"number\": [ \"a\" ] } ]", "2:15: features[0].number: expected a string, found a list")]
    [InlineData("[ { \"number\": \"a\", \"scale\": \"log\" } ]", "2:29: features[0].scale: expected one of \"none\", \"log1p\", \"standard\", \"standard-log1p\", \"rank\", found the string \"log\"")]
    [InlineData("[ { \"number\": \"a\", \"scale\": 1 } ]", "2:29: features[0].scale: expected one of \"none\", \"log1p\", \"standard\", \"standard-log1p\", \"rank\", found the number 1")]
    [InlineData("[ { \"number\": \"label\" } ]", "2:15: features[0].number: the field \"label\" holds the label, which is not known when an event is scored: name another")]
    [InlineData("[ { \"category\": [] } ]", "2:17: features[0].category: expected a list of paths of fields, at least one, found a list")]
    [InlineData("[ { \"category\": [ \"a\", \"label\" ] } ]", "2:24: features[0].category[1]: the field \"label\" holds the label, which is not known when an event is scored: name another")]
    [InlineData("[ { \"category\": [ \"a\", \"a\" ] } ]", "2:24: features[0].category[1]: the field \"a\" is there twice: keep one")]
    [InlineData("[ { \"category\": [ \"a\", 5, true ] } ]", "2:24: features[0].category[1]: expected a string, found the number 5", "2:27: features[0].category[2]: expected a string, found true")]
    [InlineData("[ { \"category\": \"a\", \"scale\": \"none\" } ]", "2:22: features[0].scale: unknown key. Known here: \"category\", \"forget\"")]
    [InlineData("[ { \"cycle\": \"time\" } ]", "2:3: features[0]: the key \"period\" is missing: how long the cycle is, a duration for the time of the event or a number for another field")]
    [InlineData("[ { \"cycle\": \"time\", \"period\": 24 } ]", "2:32: features[0].period: expected a duration from 1ms to 36525d, written as a number followed by ms, s, m, h, d or w, as \"90m\" or \"30d\", found the number 24")]
    [InlineData("[ { \"cycle\": \"time\", \"period\": \"1 d\" } ]", "2:32: features[0].period: expected a duration from 1ms to 36525d, written as a number followed by ms, s, m, h, d or w, as \"90m\" or \"30d\", found the string \"1 d\"")]
    [InlineData("[ { \"cycle\": \"angle\", \"period\": \"1d\" } ]", "2:33: features[0].period: expected a number in the unit of the field, found the string \"1d\"; only the time of the event, \"time\", takes a duration")]
    [InlineData("[ { \"cycle\": \"angle\", \"period\": 0 } ]", "2:33: features[0].period: expected a number above 0, found the number 0")]
    [InlineData("[ { \"number\": \"a\" }, { \"number\": \"a\", \"scale\": \"log1p\" } ]", "2:22: features[1]: is the same feature as features[0]: keep one")]
    [InlineData("[ { \"category\": [ \"a\", \"b\" ] }, { \"category\": [ \"a\", \"b\" ] } ]", "2:33: features[1]: is the same feature as features[0]: keep one")]
    [InlineData("[ { \"cycle\": \"time\", \"period\": \"1d\" }, { \"cycle\": \"time\", \"period\": \"24h\" } ]", "2:40: features[1]: is the same feature as features[0]: keep one")]
    public void Features_Wrong_AreRefused(string features, params string[] expected) =>
        Assert.Equal(expected.Select(error => "quay.json:" + error), Definitions.Errors($"{{ \"stream\": \"quay\", \"features\":\n{features} }}").Select(error => error.ToString()));

    [Theory]
    [InlineData("\"learning\": { \"slots\": 8 }", "2:24: learning.slots: expected a power of two from 16 to 67108864, found the number 8")]
    [InlineData("\"learning\": { \"slots\": 134217728 }", "2:24: learning.slots: expected a power of two from 16 to 67108864, found the number 134217728")]
    [InlineData("\"learning\": { \"slots\": \"1024\" }", "2:24: learning.slots: expected a power of two from 16 to 67108864, found the string \"1024\"")]
    [InlineData("\"learning\": { \"slots\": 1e999 }", "2:24: learning.slots: expected a power of two from 16 to 67108864, found the number 1e999")]
    [InlineData("\"learning\": { \"slots\": 67108864, \"bank\": [ { \"update\": \"ftrl\", \"step\": [ 1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11 ] } ] }", "2:24: learning.slots: 67108864 slots are too many for 11 settings: one array cannot hold what they keep. Take fewer of either")]
    [InlineData("\"learning\": { \"hashSeed\": -1 }", "2:27: learning.hashSeed: expected a whole number from 0 to 18446744073709551615, found the number -1")]
    [InlineData("\"learning\": { \"hashSeed\": 18446744073709551616 }", "2:27: learning.hashSeed: expected a whole number from 0 to 18446744073709551615, found the number 18446744073709551616")]
    [InlineData("\"learning\": { \"startProbability\": 0 }", "2:35: learning.startProbability: expected a number above 0 and below 1, found the number 0")]
    [InlineData("\"learning\": { \"startProbability\": 1 }", "2:35: learning.startProbability: expected a number above 0 and below 1, found the number 1")]
    [InlineData("\"learning\": { \"publish\": \"best\" }", "2:26: learning.publish: expected one of ")]
    [InlineData("\"learning\": { \"switchRate\": 1.5 }", "2:29: learning.switchRate: expected a number from 0 to 1, found the number 1.5")]
    [InlineData("\"learning\": { \"switchRate\": 1e-400 }", "2:29: learning.switchRate: expected a number from 0 to 1 that a double can hold, at least 5E-324, found the number 1e-400")]
    [InlineData("\"learning\": { \"queue\": 1 }", "2:15: learning.queue: unknown key. Known here: \"slots\", \"hashSeed\", \"bank\", \"startProbability\", \"warmStart\", \"publish\", \"switchRate\"")]
    [InlineData("\"labels\": { \"wait\": \"0s\" }", "2:21: labels.wait: expected a duration from 1s to 3650d, written as a number followed by ms, s, m, h, d or w, as \"90m\" or \"30d\", found the string \"0s\"")]
    [InlineData("\"labels\": { \"wait\": \"30 days\" }", "2:21: labels.wait: expected a duration from 1s to 3650d, written as a number followed by ms, s, m, h, d or w, as \"90m\" or \"30d\", found the string \"30 days\"")]
    [InlineData("\"labels\": { \"wait\": 30 }", "2:21: labels.wait: expected a duration from 1s to 3650d, written as a number followed by ms, s, m, h, d or w, as \"90m\" or \"30d\", found the number 30")]
    [InlineData("\"labels\": { \"unlabelled\": \"positive\" }", "2:27: labels.unlabelled: expected one of \"drop\", \"negative\", found the string \"positive\"")]
    [InlineData("\"labels\": { \"hold\": 1 }", "2:13: labels.hold: unknown key. Known here: \"wait\", \"unlabelled\", \"early\", \"keep\", \"memoryMiB\"")]
    [InlineData("\"decision\": { \"cutoff\": -0.1 }", "2:25: decision.cutoff: expected a number from 0 to 1, found the number -0.1")]
    [InlineData("\"decision\": { \"cutoff\": \"0.1\" }", "2:25: decision.cutoff: expected a number from 0 to 1, found the string \"0.1\"")]
    [InlineData("\"decision\": { \"cutof\": 0.1 }", "2:15: decision.cutof: unknown key; did you mean \"cutoff\"? Known here: \"cutoff\"")]
    [InlineData("\"health\": { \"windows\": [] }", "2:24: health.windows: expected a list of durations, at least one, found a list")]
    [InlineData("\"health\": { \"windows\": [ \"30s\" ] }", "2:26: health.windows[0]: expected a duration from 1m to 366d, written as a number followed by ms, s, m, h, d or w, as \"90m\" or \"30d\", found the string \"30s\"")]
    [InlineData("\"health\": { \"windows\": [ \"90s\" ] }", "2:26: health.windows[0]: a window is a whole number of minutes, found the string \"90s\"")]
    [InlineData("\"health\": { \"windows\": [ \"1d\", \"24h\" ] }", "2:32: health.windows[1]: the window \"1d\" is as long: keep one")]
    [InlineData("\"health\": { \"lastLabels\": 0 }", "2:27: health.lastLabels: expected a whole number from 1 to 1000000, found the number 0")]
    [InlineData("\"health\": { \"slice\": [] }", "2:13: health.slice: unknown key; did you mean \"slices\"? Known here: \"windows\", \"lastLabels\", \"slices\", \"sliceValues\", \"history\", \"reference\", \"labelsPerFalseAlarm\", \"detectAfterLabels\", \"alarms\"")]
    [InlineData("\"health\": { \"slices\": [ \"label\" ] }", "2:25: health.slices[0]: the field \"label\" holds the label, which is not known when an event is scored: name another")]
    [InlineData("\"health\": { \"slices\": [ \"a\", \"a\" ] }", "2:30: health.slices[1]: the field \"a\" is there twice: keep one")]
    [InlineData("\"health\": { \"history\": { \"hours\": \"90m\" } }", "2:35: health.history.hours: expected a duration from 1d to 366d, written as a number followed by ms, s, m, h, d or w, as \"90m\" or \"30d\", found the string \"90m\"")]
    [InlineData("\"health\": { \"history\": { \"days\": \"180h\" } }", "2:34: health.history.days: these are whole days, found the string \"180h\"")]
    [InlineData("\"health\": { \"reference\": { \"from\": \"2026-03-01\" } }", "2:36: health.reference.from: expected a date and a time at a full minute with an offset, as \"2026-03-01T00:00:00Z\", found the string \"2026-03-01\"")]
    [InlineData("\"health\": { \"alarms\": [ { \"metric\": \"auc\", \"window\": \"2h\", \"below\": 0.6 } ] }", "2:54: health.alarms[0].window: expected one of \"1h\", \"1d\", \"7d\", found the string \"2h\"; did you mean \"1h\"?")]
    [InlineData("\"health\": { \"alarms\": [ { \"metric\": \"auc\", \"window\": \"1d\", \"below\": 0.6, \"above\": 0.9 } ] }", "2:25: health.alarms[0]: has both \"above\" and \"below\": write two alarms")]
    [InlineData("\"health\": { \"alarms\": [ { \"metric\": \"auc\", \"window\": \"1d\", \"below\": 0.6, \"feature\": \"a\" } ] }", "2:85: health.alarms[0].feature: only the metrics \"drift\", \"missingShare\" and \"unseenShare\" are of a feature")]
    [InlineData("\"health\": { \"alarms\": [ { \"metric\": \"auc\", \"window\": \"1d\", \"below\": 0.6, \"slice\": { \"c\": \"x\" } } ] }", "2:83: health.alarms[0].slice: expected one of the fields of slices with its value, as { \"channel\": \"app\" }; sliced are none")]
    public void Engine_Wrong_IsRefused(string keys, string expected)
    {
        string error = Definitions.ErrorWith(keys).ToString();

        Assert.StartsWith("quay.json:" + expected, error, StringComparison.Ordinal);
        if (!expected.EndsWith(' ')) Assert.Equal("quay.json:" + expected, error);
    }

    [Fact]
    public void Lists_LongerThanTheirBounds_AreRefused()
    {
        string fields = string.Join(", ", Enumerable.Range(0, 17).Select(i => $"\"f{i}\""));
        string features = string.Join(", ", Enumerable.Range(0, 1001).Select(i => $$"""{ "number": "f{{i}}" }"""));
        string labels = string.Join(", ", Enumerable.Range(0, 1001).Select(i => $"\"v{i}\": 1"));
        string windows = string.Join(", ", Enumerable.Range(1, 17).Select(i => $"\"{i}h\""));

        Assert.Equal("expected at most 1000 features, found 1001", Definitions.Errors($$"""{ "stream": "q", "features": [ {{features}} ] }""").Single().Message);
        Assert.Equal("expected at most 16 paths of fields, found 17", Definitions.Errors($$"""{ "stream": "q", "features": [ { "category": [ {{fields}} ] } ] }""").Single().Message);
        Assert.Equal("expected at most 1000 values, found 1001", Definitions.ErrorWith($"\"record\": {{ \"labelValues\": {{ {labels} }} }}").Message);
        Assert.Equal("expected at most 16 durations, found 17", Definitions.ErrorWith($"\"health\": {{ \"windows\": [ {windows} ] }}").Message);
    }

    [Theory]
    [InlineData("\"source\": {}", "2:11: source: one of the keys \"file\" and \"kafka\" is missing: it says where the records come from")]
    [InlineData("\"source\": { \"file\": 3 }", "2:21: source.file: expected a string, found the number 3")]
    [InlineData("\"source\": { \"file\": \"in.txt\" }", "2:21: source.file: the name \"in.txt\" does not tell the format (.jsonl, .ndjson or .csv, with .gz or .zst behind it where it is compressed, or .parquet would): add \"format\": \"jsonl\", \"csv\" or \"parquet\"")]
    [InlineData("\"source\": { \"file\": \"in.parquet.gz\" }", "2:21: source.file: the name \"in.parquet.gz\" does not tell the format (.jsonl, .ndjson or .csv, with .gz or .zst behind it where it is compressed, or .parquet would): add \"format\": \"jsonl\", \"csv\" or \"parquet\"")]
    [InlineData("\"source\": { \"file\": \"in.jsonl.zst\", \"follow\": true }", "2:47: source.follow: a compressed file or Parquet has an end that cannot be followed: leave this away")]
    [InlineData("\"source\": { \"file\": \"-\", \"format\": \"parquet\" }", "2:36: source.format: Parquet is read from its end, which standard input does not have: name a file")]
    [InlineData("\"source\": { \"file\": \"-\" }", "2:21: source.file: the name \"-\" does not tell the format (.jsonl, .ndjson or .csv, with .gz or .zst behind it where it is compressed, or .parquet would): add \"format\": \"jsonl\", \"csv\" or \"parquet\"")]
    [InlineData("\"source\": { \"file\": \"a\\u0000.csv\" }", "2:21: source.file: the name of a file cannot hold the character NUL")]
    [InlineData("\"source\": { \"file\": \"a.csv\", \"format\": \"tsv\" }", "2:40: source.format: expected one of \"jsonl\", \"csv\", \"parquet\", found the string \"tsv\"; did you mean \"csv\"?")]
    [InlineData("\"source\": { \"file\": \"a.csv\", \"follow\": \"yes\" }", "2:40: source.follow: expected true or false, found the string \"yes\"")]
    [InlineData("\"scores\": { \"file\": \"-\" }", "2:21: scores.file: standard output cannot be taken up again where a run stopped: name a file")]
    [InlineData("\"scores\": { \"reasons\": 21 }", "2:24: scores.reasons: expected a whole number from 0 to 20, found the number 21")]
    [InlineData("\"scores\": { \"labelled\": 1 }", "2:25: scores.labelled: expected true or false, found the number 1")]
    [InlineData("\"rejects\": {}", "2:12: rejects: one of the keys \"file\" and \"kafka\" is missing: it says where rejects are written")]
    [InlineData("\"scores\": { \"file\": \"out\" }, \"rejects\": { \"file\": \"./x/../out\" }", "2:51: rejects.file: is the same file as scores.file: name another")]
    [InlineData("\"source\": { \"file\": \"a.csv\" }, \"scores\": { \"file\": \"a.csv\" }", "2:52: scores.file: is the same file as source.file: name another")]
    [InlineData("\"state\": { \"every\": \"5s\" }", "2:10: state: the key \"folder\" is missing: it names the folder that the state is kept in")]
    [InlineData("\"state\": { \"folder\": \"s\", \"every\": 5 }", "2:36: state.every: expected a duration from 10ms to 1d, written as a number followed by ms, s, m, h, d or w, as \"90m\" or \"30d\", found the number 5")]
    [InlineData("\"state\": { \"folder\": \"s\", \"everyEvents\": 0 }", "2:42: state.everyEvents: expected a whole number from 1 to 1000000000, found the number 0")]
    [InlineData("\"state\": { \"folder\": \"\" }", "2:22: state.folder: expected a string that is not empty, found the string \"\"")]
    public void FilesAndState_Wrong_AreRefused(string keys, params string[] expected) => AssertErrors(keys, expected);

    [Theory]
    [InlineData("\"telemetry\": \"http://127.0.0.1:4317\"", "telemetry")]
    [InlineData("\"publish\": \"blend\"", "publish")]
    public void Definition_UnknownKey_IsRefused(string keys, string path)
    {
        var error = Definitions.ErrorWith(keys);

        Assert.Equal((new DefinitionPlace("quay.json", 2, 1), path), (error.Place, error.Path));
        Assert.StartsWith("unknown key. Known here: \"$schema\", \"stream\",", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Definition_Empty_MissesItsKeys() =>
        Assert.Equal(
            ["quay.json:1:1: the key \"stream\" is missing: it names the stream", "quay.json:1:1: the key \"features\" is missing: it lists what the model sees of an event"],
            Definitions.Errors("{}").Select(error => error.ToString()));

    [Fact]
    public void Definition_ToRun_NeedsSourceScoresAndState() =>
        Assert.Equal(
            [
                "the key \"source\" is missing: it says where the records come from",
                "the key \"state\" is missing: it says in which folder the state is kept",
                "one of the keys \"file\" and \"kafka\" is missing: it says where scores are written",
            ],
            Definitions.Errors(Definitions.With("\"scores\": { \"reasons\": 1 }"), use: DefinitionUse.Run).Select(error => error.Message));

    [Fact]
    public void LabelValues_WithoutGoodOnes_AreRightWhereUnlabelledMeansGood()
    {
        var definition = Definitions.ReadWith("\"record\": { \"labelValues\": { \"bad\": 1 } }, \"labels\": { \"unlabelled\": \"negative\" }");

        Assert.Equal([KeyValuePair.Create("bad", 1)], definition.Engine.Record.LabelValues);
    }

    private static void AssertErrors(string keys, string[] expected) =>
        Assert.Equal(expected.Select(error => "quay.json:" + error), Definitions.Errors(Definitions.With(keys)).Select(error => error.ToString()));
}
