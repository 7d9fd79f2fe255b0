using System.Text.Json.Nodes;
using System.Text.RegularExpressions;
using StreamLogit.Pipeline.Definition;

namespace StreamLogit.Pipeline.Tests.Definition;

/// <summary>The definitions that the documentation and the demo streams show can be used, and the reference page lists every key.</summary>
public sealed partial class ExampleTests
{
    private const string Page = "docs/stream-definition.md";

    /// <summary>The complete definitions in the documentation, and the files of the demo streams.</summary>
    public static TheoryData<string, string> Examples()
    {
        var examples = new TheoryData<string, string>();
        foreach (string file in Directory.EnumerateFiles(RepositoryFiles.At("docs"), "*.md").Append(RepositoryFiles.At("README.md")))
        {
            if (!File.Exists(file)) continue;
            int number = 0;
            foreach (Match block in JsonBlock().Matches(File.ReadAllText(file)))
            {
                if (block.Groups[1].Value.Contains("\"stream\":", StringComparison.Ordinal)) examples.Add($"{Path.GetFileName(file)} {++number}", block.Groups[1].Value);
            }
        }
        string demo = RepositoryFiles.At("demo-streams");
        foreach (string file in Directory.Exists(demo) ? Directory.EnumerateFiles(demo, "*.json*", SearchOption.AllDirectories) : [])
        {
            if (!file.EndsWith(".jsonl", StringComparison.Ordinal)) examples.Add(Path.GetRelativePath(RepositoryFiles.Root, file), File.ReadAllText(file));
        }
        return examples;
    }

    [Theory]
    [MemberData(nameof(Examples))]
    public void Example_ReadsAndFitsTheSchema(string name, string definition)
    {
        Assert.NotEmpty(Definitions.Read(definition, use: DefinitionUse.Fit).Engine.Features);
        Assert.True(SchemaFile.Accepts(definition), name);
    }

    [Fact]
    public void CompleteExample_HasEverySectionAndKeyThatCanStandTogether()
    {
        var examples = JsonBlock().Matches(RepositoryFiles.Read(Page)).Select(block => JsonNode.Parse(
            block.Groups[1].Value, null, new() { CommentHandling = System.Text.Json.JsonCommentHandling.Skip, AllowTrailingCommas = true })!).ToList();
        var (files, topics) = (examples[0], examples[1]);

        foreach (var (key, schema) in SchemaFile.Root["properties"]!.AsObject())
        {
            var example = key == "kafka" ? topics : files;
            Assert.NotNull(example[key]);
            if (schema!["properties"] is JsonObject keys)
                Assert.Equal(keys.Select(part => part.Key).Where(part => part != "kafka"), example[key]!.AsObject().Select(part => part.Key));
        }
        foreach (var (section, schema) in TopicSections)
            Assert.Equal(SchemaFile.Keys(SchemaFile.Root["$defs"]![schema]!), topics[section]!["kafka"]!.AsObject().Select(part => part.Key));
    }

    private static readonly (string Section, string Schema)[] TopicSections = [("source", "kafkaSource"), ("scores", "kafkaScores"), ("rejects", "kafkaRejects")];

    /// <summary>The headings of the page that stand above a table of keys, and the object of the schema that each is about.</summary>
    public static TheoryData<string, string> Tables()
    {
        var tables = new TheoryData<string, string> { { "The definition", "" } };
        foreach (var (section, schema) in SchemaFile.Root["properties"]!.AsObject())
        {
            if (schema!["properties"] is not null) tables.Add($"`{section}`", $"properties/{section}");
        }
        foreach (string kind in SchemaFile.Choices(SchemaFile.Root["properties"]!["features"]!["items"]!)) tables.Add($"Feature `{kind}`", $"$defs/{kind}");
        var entries = SchemaFile.Root["properties"]!["learning"]!["properties"]!["bank"]!["anyOf"]![1]!["items"]!;
        foreach (string rule in SchemaFile.Choices(entries)) tables.Add($"Update rule `{rule}`", $"$defs/{rule}");
        tables.Add("Alarms", "$defs/alarm");
        tables.Add("`listen`", "$defs/listen");
        tables.Add("`webhook`", "$defs/webhook");
        foreach (var (section, schema) in TopicSections) tables.Add($"`{section}.kafka`", $"$defs/{schema}");
        return tables;
    }

    [Theory]
    [MemberData(nameof(Tables))]
    public void Page_Table_ListsTheKeysWithTheirDefaults(string heading, string path)
    {
        JsonNode schema = SchemaFile.Root;
        foreach (string part in path.Split('/', StringSplitOptions.RemoveEmptyEntries)) schema = schema[part]!;
        var required = schema["required"]?.AsArray().Select(key => key!.GetValue<string>()).ToHashSet() ?? [];

        var rows = Rows(heading);

        Assert.Equal(SchemaFile.Keys(schema), rows.Select(row => row.Key));
        foreach (var (key, standard) in rows)
        {
            if (required.Contains(key)) Assert.Equal("required", standard);
            else if (schema["properties"]![key]!["default"] is { } value) Assert.True(JsonNode.DeepEquals(value, JsonNode.Parse(standard.Trim('`'))), $"{key}: {standard}");
            else Assert.Contains(standard, new[] { "none", "see below", "by the name" });
        }
    }

    [Fact]
    public void Page_HasNoTableOfSomethingElse() =>
        Assert.Equal(Tables().Count, TableHead().Count(RepositoryFiles.Read(Page)));

    private static List<(string Key, string Default)> Rows(string heading)
    {
        string page = RepositoryFiles.Read(Page);
        var section = Regex.Match(page, $@"^##+ {Regex.Escape(heading)}\n(.*?)(?=^##|\z)", RegexOptions.Multiline | RegexOptions.Singleline);
        Assert.True(section.Success, heading);
        return [.. Row().Matches(section.Groups[1].Value).Select(row => (row.Groups[1].Value, row.Groups[2].Value))];
    }

    [GeneratedRegex("^```jsonc\n(.*?)^```", RegexOptions.Multiline | RegexOptions.Singleline)]
    private static partial Regex JsonBlock();

    [GeneratedRegex(@"^\| key \| type \| unit \| default \| meaning \|$", RegexOptions.Multiline)]
    private static partial Regex TableHead();

    [GeneratedRegex(@"^\| `([^`]+)` \| [^|]* \| [^|]*\| ([^|]*) \| .* \|$", RegexOptions.Multiline)]
    private static partial Regex Row();
}
