using System.Text.Json;
using System.Text.Json.Nodes;
using System.Text.RegularExpressions;

namespace StreamLogit.Pipeline.Tests.Definition;

/// <summary>The schema and the reader know the same keys and refuse the same values, as far as a schema can.</summary>
public sealed partial class SchemaTests
{
    /// <summary>Every object of the schema and a definition that gives it a key which nobody knows.</summary>
    public static TheoryData<string, string> Objects()
    {
        var objects = new TheoryData<string, string> { { "", """{ "stream": "q", "features": [ { "number": "a" } ], "?": 0 }""" } };
        foreach (var (section, schema) in SchemaFile.Root["properties"]!.AsObject())
        {
            if (schema!["type"]?.GetValue<string>() == "object") objects.Add($"properties/{section}", Definitions.With($$"""  "{{section}}": { "?": 0 } """));
        }
        foreach (string kind in FeatureKinds()) objects.Add($"$defs/{kind}", $$"""{ "stream": "q", "features": [ { "{{kind}}": "a", "?": 0 } ] }""");
        foreach (string rule in UpdateRules())
        {
            objects.Add($"$defs/{rule}", Definitions.With($$"""  "learning": { "bank": [ { "update": "{{rule}}", "?": 0 } ] } """));
        }
        objects.Add("$defs/kafkaSource", Definitions.With("""  "source": { "kafka": { "?": 0 } } """));
        objects.Add("$defs/kafkaScores", Definitions.With("""  "scores": { "kafka": { "?": 0 } } """));
        objects.Add("$defs/kafkaRejects", Definitions.With("""  "rejects": { "kafka": { "?": 0 } } """));
        objects.Add("$defs/webhook", Definitions.With("""  "webhook": { "?": 0 } """));
        return objects;
    }

    [Theory]
    [MemberData(nameof(Objects))]
    public void Keys_OfEveryObject_AreThoseOfTheReader(string path, string definition)
    {
        JsonNode schema = SchemaFile.Root;
        foreach (string part in path.Split('/', StringSplitOptions.RemoveEmptyEntries)) schema = schema[part]!;

        var unknown = Definitions.Errors(definition).Single(error => error.Path.EndsWith("[\"?\"]", StringComparison.Ordinal));

        Assert.Equal(NamesAfter("Known here: ", unknown.Message), SchemaFile.Keys(schema));
        Assert.False(schema["additionalProperties"]!.GetValue<bool>());
    }

    [Fact]
    public void FeatureKinds_AreThoseOfTheReader() =>
        Assert.Equal(NamesAfter("one of the keys ", Assert.Single(Definitions.Errors("""{ "stream": "q", "features": [ {} ] }""")).Message), FeatureKinds());

    [Fact]
    public void UpdateRules_AreThoseOfTheReader()
    {
        var error = Definitions.ErrorWith("\"learning\": { \"bank\": [ { \"update\": \"?\" } ] }");

        Assert.Equal(NamesAfter("expected one of ", error.Message), UpdateRules());
        Assert.All(UpdateRules(), rule => Assert.Equal(rule, SchemaFile.Root["$defs"]![rule]!["properties"]!["update"]!["const"]!.GetValue<string>()));
    }

    [Fact]
    public void Keys_All_HaveADescription()
    {
        var undescribed = AllObjects(SchemaFile.Root)
            .Where(schema => schema["properties"] is JsonObject && schema["type"] is not null)
            .SelectMany(schema => schema["properties"]!.AsObject())
            .Where(property => property.Value!["description"] is null)
            .Select(property => property.Key);

        Assert.Empty(undescribed);
    }

    [Theory]
    [InlineData("record", "timeFormat")]
    [InlineData("labels", "unlabelled")]
    [InlineData("source", "format")]
    public void Choices_InTheSchema_AreThoseOfTheReader(string section, string key)
    {
        var error = Definitions.Errors(Definitions.With($$"""  "{{section}}": { "file": "a.csv", "{{key}}": "?" } """)).Single(error => error.Path == $"{section}.{key}");

        Assert.Equal(NamesAfter("expected one of ", error.Message), SchemaFile.Root["properties"]![section]!["properties"]![key]!["enum"]!.AsArray().Select(name => name!.GetValue<string>()));
    }

    [Fact]
    public void Scales_InTheSchema_AreThoseOfTheReader() =>
        Assert.Equal(
            NamesAfter("expected one of ", Assert.Single(Definitions.Errors("""{ "stream": "q", "features": [ { "number": "a", "scale": "?" } ] }""")).Message),
            SchemaFile.Root["$defs"]!["number"]!["properties"]!["scale"]!["enum"]!.AsArray().Select(name => name!.GetValue<string>()));

    [Theory]
    [InlineData("record", "maxBytes")]
    [InlineData("record", "maxDepth")]
    [InlineData("histories", "memoryMiB")]
    [InlineData("learning", "hashSeed")]
    [InlineData("health", "lastLabels")]
    [InlineData("health", "sliceValues")]
    [InlineData("health", "labelsPerFalseAlarm")]
    [InlineData("health", "detectAfterLabels")]
    [InlineData("scores", "reasons")]
    [InlineData("state", "everyEvents")]
    public void Ranges_InTheSchema_AreThoseOfTheReader(string section, string key)
    {
        var schema = SchemaFile.Root["properties"]![section]!["properties"]![key]!;
        var error = Definitions.Errors(Definitions.With($$"""  "{{section}}": { "folder": "s", "{{key}}": -1 } """)).Single(error => error.Path == $"{section}.{key}");

        Assert.StartsWith($"expected a whole number from {schema["minimum"]} to {schema["maximum"]}, ", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void AlarmMetrics_InTheSchema_AreThoseOfTheReader()
    {
        var error = Definitions.ErrorWith("\"health\": { \"alarms\": [ { \"metric\": \"?\", \"window\": \"1d\", \"above\": 1 } ] }");

        Assert.Equal(NamesAfter("expected one of ", error.Message), SchemaFile.Root["$defs"]!["alarm"]!["properties"]!["metric"]!["enum"]!.AsArray().Select(name => name!.GetValue<string>()));
    }

    [Fact]
    public void Slots_InTheSchema_AreThePowersOfTwoThatTheReaderTakes()
    {
        var powers = SchemaFile.Root["properties"]!["learning"]!["properties"]!["slots"]!["enum"]!.AsArray().Select(slots => slots!.GetValue<int>()).ToList();

        Assert.Equal(Enumerable.Range(4, 23).Select(exponent => 1 << exponent), powers);
        Assert.All(powers, slots => Assert.Equal(slots, Definitions.ReadWith($"\"learning\": {{ \"slots\": {slots} }}").Engine.Learning.Slots));
    }

    [Fact]
    public void Defaults_InTheSchema_AreThoseOfTheReader()
    {
        var absent = Definitions.ReadWith("\"kafka\": { \"servers\": \"a:1\" }, \"source\": { \"file\": \"a.csv\" }, \"state\": { \"folder\": \"s\" }, \"recording\": { \"folder\": \"r\" }");
        var written = new JsonObject { ["stream"] = "quay", ["features"] = new JsonArray(new JsonObject { ["number"] = "amount" }) };
        foreach (var (section, schema) in SchemaFile.Root["properties"]!.AsObject())
        {
            if (schema!["properties"] is not JsonObject keys || section == "rejects") continue;
            var values = new JsonObject();
            foreach (var (key, value) in keys) if (value!["default"] is { } standard) values[key] = standard.DeepClone();
            if (section == "source") values["file"] = "a.csv";
            if (section == "state") values["folder"] = "s";
            if (section == "recording") values["folder"] = "r";
            if (section == "kafka") values["servers"] = "a:1";
            written[section] = values;
        }

        var read = Definitions.Read(written.ToJsonString());

        Assert.Equal(absent.Engine.Record with { LabelValues = read.Engine.Record.LabelValues }, read.Engine.Record);
        Assert.Equal(absent.Engine.Record.LabelValues.OrderBy(pair => pair.Key), read.Engine.Record.LabelValues.OrderBy(pair => pair.Key));
        Assert.Equal(absent.Engine.Histories, read.Engine.Histories);
        Assert.Equal(absent.Engine.Learning, read.Engine.Learning);
        Assert.Equal(absent.Engine.Labels, read.Engine.Labels);
        Assert.Equal(absent.Engine.Decision, read.Engine.Decision);
        Assert.Equal(absent.Engine.Health.Windows, read.Engine.Health.Windows);
        Assert.Equal(
            absent.Engine.Health with { Windows = read.Engine.Health.Windows, Slices = read.Engine.Health.Slices, Alarms = read.Engine.Health.Alarms },
            read.Engine.Health);
        Assert.Equal(absent.Kafka!.GiveUpAfter, read.Kafka!.GiveUpAfter);
        Assert.Equal((absent.Source, absent.State, absent.Recording), (read.Source, read.State, read.Recording));
    }

    [Fact]
    public void Defaults_OfUpdateRules_AreThoseOfTheReader()
    {
        foreach (string rule in UpdateRules())
        {
            var absent = new JsonObject { ["update"] = rule };
            if (SchemaFile.Root["$defs"]![rule]!["properties"]!["step"] is not null) absent["step"] = 0.1;
            var written = absent.DeepClone().AsObject();
            foreach (var (key, schema) in SchemaFile.Root["$defs"]![rule]!["properties"]!.AsObject()) if (schema!["default"] is { } standard) written[key] = standard.DeepClone();

            Assert.Equal(
                Definitions.ReadWith($"\"learning\": {{ \"bank\": [ {absent.ToJsonString()} ] }}").Engine.Learning.Bank,
                Definitions.ReadWith($"\"learning\": {{ \"bank\": [ {written.ToJsonString()} ] }}").Engine.Learning.Bank);
        }
    }

    private static IEnumerable<string> FeatureKinds() => SchemaFile.Choices(SchemaFile.Root["properties"]!["features"]!["items"]!);

    private static IEnumerable<string> UpdateRules() =>
        SchemaFile.Choices(SchemaFile.Root["properties"]!["learning"]!["properties"]!["bank"]!["anyOf"]![1]!["items"]!);

    private static IEnumerable<JsonObject> AllObjects(JsonNode? node) => node switch
    {
        JsonObject schema => schema.SelectMany(member => AllObjects(member.Value)).Prepend(schema),
        JsonArray list => list.SelectMany(AllObjects),
        _ => [],
    };

    /// <summary>The quoted names in a row that follow some words of a message.</summary>
    private static string[] NamesAfter(string words, string message)
    {
        string row = QuotedRow().Match(message, message.IndexOf(words, StringComparison.Ordinal) + words.Length).Value;
        return JsonSerializer.Deserialize<string[]>($"[{row}]")!;
    }

    [GeneratedRegex("""\G"[^"]*"(, "[^"]*")*""")]
    private static partial Regex QuotedRow();
}
