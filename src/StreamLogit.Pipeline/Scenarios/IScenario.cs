using System.Text.Json;

namespace StreamLogit.Pipeline.Scenarios;

/// <summary>An invented source of events whose true probabilities are known.</summary>
internal interface IScenario
{
    /// <summary>The names of the fields that its events may have, without those of nested ones.</summary>
    IReadOnlyList<string> Fields { get; }

    /// <summary>The share of events whose label never comes, 0 to 1.</summary>
    double UnlabelledShare { get; }

    /// <summary>The next event. Times never fall; its fields are those that <see cref="WriteFields"/> writes next.</summary>
    ScenarioEvent Next();

    /// <summary>What the world does to this stream midway.</summary>
    void Change();

    /// <summary>How long after the event its label becomes known, in milliseconds.</summary>
    long LabelDelayMilliseconds();

    /// <summary>Writes the fields of the last event, without id and time.</summary>
    void WriteFields(Utf8JsonWriter json);

    /// <summary>Writes the value of a label, without its property name.</summary>
    void WriteLabel(Utf8JsonWriter json, bool isBad);
}
