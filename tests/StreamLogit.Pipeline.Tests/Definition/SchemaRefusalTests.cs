namespace StreamLogit.Pipeline.Tests.Definition;

/// <summary>What a schema can say, both the schema and the reader refuse.</summary>
public sealed class SchemaRefusalTests
{
    [Theory]
    [InlineData("\"telemetry\": \"http://127.0.0.1:4317\"")]
    [InlineData("\"listen\": 7070")]
    [InlineData("\"listen\": \"127.0.0.1:7070\"")]
    [InlineData("\"listen\": \"http://127.0.0.1\"")]
    [InlineData("\"listen\": \"http://127.0.0.1:7070/page\"")]
    [InlineData("\"listen\": {}")]
    [InlineData("\"listen\": { \"url\": \"http://127.0.0.1:7070\", \"keyFile\": \"k\", \"keyVariable\": \"K\" }")]
    [InlineData("\"listen\": { \"url\": \"http://127.0.0.1:7070\", \"certificateKey\": \"k\" }")]
    [InlineData("\"listen\": { \"url\": \"http://127.0.0.1:7070\", \"hosts\": [] }")]
    [InlineData("\"listen\": { \"url\": \"http://127.0.0.1:7070\", \"key\": \"secret\" }")]
    [InlineData("\"webhook\": {}")]
    [InlineData("\"webhook\": { \"url\": \"http://127.0.0.1:1\" }")]
    [InlineData("\"webhook\": { \"url\": \"127.0.0.1:1\", \"secretFile\": \"s\" }")]
    [InlineData("\"webhook\": { \"url\": \"http://u:p@127.0.0.1:1\", \"secretFile\": \"s\" }")]
    [InlineData("\"webhook\": { \"url\": \"http://127.0.0.1:1\", \"secretFile\": \"s\", \"secretVariable\": \"S\" }")]
    [InlineData("\"webhook\": { \"url\": \"http://127.0.0.1:1\", \"secret\": \"plain\" }")]
    [InlineData("\"$schema\": 1")]
    [InlineData("\"record\": { \"id\": \"a..b\" }")]
    [InlineData("\"record\": { \"id\": \"\" }")]
    [InlineData("\"record\": { \"timeFormat\": \"iso\" }")]
    [InlineData("\"record\": { \"labelValues\": {} }")]
    [InlineData("\"record\": { \"labelValues\": { \"a\": 0, \"b\": 0 } }")]
    [InlineData("\"record\": { \"labelValues\": { \"a\": 1, \"b\": 0.5 } }")]
    [InlineData("\"record\": { \"maxBytes\": 1e9 }")]
    [InlineData("\"record\": { \"maxDepth\": 1.5 }")]
    [InlineData("\"learning\": { \"slots\": 1000 }")]
    [InlineData("\"learning\": { \"hashSeed\": -1 }")]
    [InlineData("\"learning\": { \"bank\": \"none\" }")]
    [InlineData("\"learning\": { \"bank\": [] }")]
    [InlineData("\"learning\": { \"bank\": [ { \"update\": \"sgd\" } ] }")]
    [InlineData("\"learning\": { \"bank\": [ { \"update\": \"sgd\", \"step\": 0 } ] }")]
    [InlineData("\"learning\": { \"bank\": [ { \"update\": \"sgd\", \"step\": [] } ] }")]
    [InlineData("\"learning\": { \"bank\": [ { \"update\": \"sgd\", \"step\": [ 0.1, 0.10 ] } ] }")]
    [InlineData("\"learning\": { \"bank\": [ { \"update\": \"sgd\", \"step\": 0.1, \"stepDecay\": 2 } ] }")]
    [InlineData("\"learning\": { \"bank\": [ { \"update\": \"sgd\", \"step\": 0.1, \"weightDecay\": -1 } ] }")]
    [InlineData("\"learning\": { \"bank\": [ { \"step\": 0.1 } ] }")]
    [InlineData("\"learning\": { \"bank\": [ { \"update\": \"sgd\", \"step\": 1e7 } ] }")]
    [InlineData("\"learning\": { \"bank\": [ { \"update\": \"sgd\", \"step\": 0.1, \"overshootProof\": [ true, true ] } ] }")]
    [InlineData("\"learning\": { \"bank\": [ { \"update\": \"sgd\", \"step\": 0.1, \"forget\": 86400 } ] }")]
    [InlineData("\"learning\": { \"bank\": [ { \"update\": \"adagrad\", \"step\": 0.1, \"weightDecay\": 0 } ] }")]
    [InlineData("\"learning\": { \"bank\": [ { \"update\": \"adagrad\", \"sumHalfLife\": 9 } ] }")]
    [InlineData("\"learning\": { \"bank\": [ { \"update\": \"ftrl\", \"step\": 0.1, \"beta\": 0 } ] }")]
    [InlineData("\"learning\": { \"bank\": [ { \"update\": \"ftrl\", \"step\": 0.1, \"l1\": -1 } ] }")]
    [InlineData("\"learning\": { \"bank\": [ { \"update\": \"newton\", \"forgetting\": 1.1 } ] }")]
    [InlineData("\"learning\": { \"bank\": [ { \"update\": \"newton\", \"prior\": [] } ] }")]
    [InlineData("\"learning\": { \"publish\": \"\" }")]
    [InlineData("\"learning\": { \"switchRate\": 2 }")]
    [InlineData("\"learning\": { \"startProbability\": 1 }")]
    [InlineData("\"labels\": { \"wait\": \"30 days\" }")]
    [InlineData("\"labels\": { \"unlabelled\": true }")]
    [InlineData("\"decision\": { \"cutoff\": \"0.5\" }")]
    [InlineData("\"health\": { \"windows\": [ 60 ] }")]
    [InlineData("\"health\": { \"lastLabels\": 1000001 }")]
    [InlineData("\"health\": { \"slices\": [] }")]
    [InlineData("\"health\": { \"slices\": [ \"a\", \"b\", \"c\", \"d\", \"e\" ] }")]
    [InlineData("\"health\": { \"sliceValues\": 63 }")]
    [InlineData("\"health\": { \"history\": { \"weeks\": \"4w\" } }")]
    [InlineData("\"health\": { \"reference\": { \"length\": 7 } }")]
    [InlineData("\"health\": { \"labelsPerFalseAlarm\": 999 }")]
    [InlineData("\"health\": { \"alarms\": [ { \"metric\": \"rmse\", \"window\": \"1d\", \"above\": 1 } ] }")]
    [InlineData("\"health\": { \"alarms\": [ { \"metric\": \"auc\", \"above\": 1 } ] }")]
    [InlineData("\"health\": { \"alarms\": [ { \"metric\": \"auc\", \"window\": \"1d\" } ] }")]
    [InlineData("\"source\": {}")]
    [InlineData("\"source\": { \"file\": \"in.txt\" }")]
    [InlineData("\"source\": { \"file\": \"a.csv\", \"follow\": null }")]
    [InlineData("\"scores\": { \"file\": \"-\" }")]
    [InlineData("\"scores\": { \"reasons\": 21 }")]
    [InlineData("\"rejects\": {}")]
    [InlineData("\"state\": { \"every\": \"10s\" }")]
    [InlineData("\"state\": { \"folder\": \"s\", \"every\": \"1e3s\" }")]
    [InlineData("\"state\": { \"folder\": \"s\\u0000\" }")]
    [InlineData("\"state\": []")]
    public void Section_Wrong_IsRefusedByBoth(string keys) => AssertRefused(Definitions.With(keys));

    [Theory]
    [InlineData("{}")]
    [InlineData("[]")]
    [InlineData("{ \"features\": [ { \"number\": \"a\" } ] }")]
    [InlineData("{ \"stream\": \"q\" }")]
    [InlineData("{ \"stream\": \"\", \"features\": [ { \"number\": \"a\" } ] }")]
    [InlineData("{ \"stream\": \"q\", \"features\": [] }")]
    [InlineData("{ \"stream\": \"q\", \"features\": [ {} ] }")]
    [InlineData("{ \"stream\": \"q\", \"features\": [ { \"number\": \"a\", \"category\": \"b\" } ] }")]
    [InlineData("{ \"stream\": \"q\", \"features\": [ { \"number\": \"a\", \"scale\": \"log\" } ] }")]
    [InlineData("{ \"stream\": \"q\", \"features\": [ { \"category\": [] } ] }")]
    [InlineData("{ \"stream\": \"q\", \"features\": [ { \"category\": [ \"a\", \"a\" ] } ] }")]
    [InlineData("{ \"stream\": \"q\", \"features\": [ { \"cycle\": \"time\" } ] }")]
    [InlineData("{ \"stream\": \"q\", \"features\": [ { \"cycle\": \"angle\", \"period\": 0 } ] }")]
    [InlineData("{ \"stream\": \"q\", \"features\": [ { \"history\": \"count\", \"per\": \"card\" } ] }")]
    public void Definition_Wrong_IsRefusedByBoth(string definition) => AssertRefused(definition);

    [Fact]
    public void Lists_LongerThanTheirBounds_AreRefusedByBoth()
    {
        string fields = string.Join(", ", Enumerable.Range(0, 17).Select(i => $"\"f{i}\""));
        string features = string.Join(", ", Enumerable.Range(0, 1001).Select(i => $$"""{ "number": "f{{i}}" }"""));
        string labels = string.Join(", ", Enumerable.Range(0, 1001).Select(i => $"\"v{i}\": 1"));
        string windows = string.Join(", ", Enumerable.Range(1, 17).Select(i => $"\"{i}h\""));
        string steps = string.Join(", ", Enumerable.Range(1, 65).Select(i => $"{i}e-3"));

        AssertRefused($$"""{ "stream": "q", "features": [ {{features}} ] }""");
        AssertRefused($$"""{ "stream": "q", "features": [ { "category": [ {{fields}} ] } ] }""");
        AssertRefused(Definitions.With($"\"record\": {{ \"labelValues\": {{ {labels} }} }}"));
        AssertRefused(Definitions.With($"\"health\": {{ \"windows\": [ {windows} ] }}"));
        AssertRefused(Definitions.With($$"""  "learning": { "bank": [ { "update": "sgd", "step": [ {{steps}} ] } ] } """));
    }

    private static void AssertRefused(string definition)
    {
        Assert.NotEmpty(Definitions.Errors(definition));
        Assert.False(SchemaFile.Accepts(definition));
    }
}
