using System.Collections.Immutable;
using System.Globalization;
using System.Text.Json;
using StreamLogit.Pipeline.Options.Kafka;

namespace StreamLogit.Pipeline.Definition.Sections.Kafka;

/// <summary><c>source.kafka</c>: the topics that records come from.</summary>
internal static class KafkaSourceSection
{
    private const int MostTopics = 100;

    private static readonly string[] TimeForms = ["yyyy-MM-ddTHH:mm:ssK", "yyyy-MM-ddTHH:mm:ss.FFFFFFK"];

    private static readonly (string Name, TopicPlace Place)[] Places =
        [("committed", TopicPlace.Committed), ("earliest", TopicPlace.Earliest), ("latest", TopicPlace.Latest)];

    public static KafkaSourceOptions? Read(ValueReader value, string stream)
    {
        if (value.Object() is not { } section) return null;
        var topicsKey = section.Required("topics", "it names the topic of the events, or a list of topics");
        var labelTopicKey = section.Optional("labelTopic");
        string? group = section.Optional("group")?.Text();
        string? instance = section.Optional("instance")?.Text();
        var start = ReadStart(section.Optional("start"));
        var properties = KafkaProperties.Read(section.Optional("properties"));
        section.End();

        var topics = ReadTopics(topicsKey);
        string? labelTopic = labelTopicKey is null ? null : TopicName.Read(labelTopicKey);
        if (labelTopic is not null && topics?.Contains(labelTopic) == true) labelTopicKey!.Error("is among the topics already: leave it away");
        return topics is not { } names ? null : new KafkaSourceOptions
        {
            Topics = names,
            LabelTopic = labelTopic,
            Group = group ?? stream,
            Instance = instance ?? "main",
            Start = start ?? TopicStart.Committed,
            Properties = properties,
        };
    }

    private static ImmutableArray<string>? ReadTopics(ValueReader? value)
    {
        if (value?.OneOrList("topics", MostTopics) is not { } items) return null;
        var names = ImmutableArray.CreateBuilder<string>();
        foreach (var item in items)
        {
            if (TopicName.Read(item) is not { } name) continue;
            if (names.Contains(name)) item.Error($"the topic {Quoted.Text(name)} is there twice: keep one");
            names.Add(name);
        }
        return names.Count == 0 ? null : names.ToImmutable();
    }

    private static TopicStart? ReadStart(ValueReader? value)
    {
        if (value is null) return null;
        string text = value.Value.Kind == JsonValueKind.String ? value.Value.Text : "";
        foreach (var (name, place) in Places)
        {
            if (text == name) return new TopicStart(place);
        }
        if (DateTimeOffset.TryParseExact(text, TimeForms, CultureInfo.InvariantCulture, DateTimeStyles.None, out var time) && !text.EndsWith(':') && HasOffset(text))
            return new TopicStart(TopicPlace.Time, time.ToUnixTimeMilliseconds());
        value.Error($"expected one of {Quoted.List(Places.Select(place => place.Name))}, or a time with an offset, as \"2026-03-01T08:15:30Z\", found {value.Value.Describe()}");
        return null;
    }

    private static bool HasOffset(string time) => time.EndsWith('Z') || time.LastIndexOfAny(['+', '-']) > time.IndexOf('T', StringComparison.Ordinal);
}
