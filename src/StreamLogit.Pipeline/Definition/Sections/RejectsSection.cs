using StreamLogit.Pipeline.Definition.Sections.Kafka;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary><c>rejects</c>: where records that cannot be used are written.</summary>
internal static class RejectsSection
{
    public static OutputOptions? Read(ValueReader? value, FilePaths files)
    {
        if (value?.Object() is not { } section) return null;
        var file = section.Optional("file");
        var kafka = section.Optional("kafka");
        section.End();
        if ((file is null) == (kafka is null))
        {
            section.Error(file is null
                ? "one of the keys \"file\" and \"kafka\" is missing: it says where rejects are written"
                : "has both \"file\" and \"kafka\": rejects are written to one place");
        }
        if (kafka is not null) return TopicOutputSection.ReadRejects(kafka);
        return files.ReadOutput(file) is { } path ? new FileOutputOptions(path) : null;
    }
}
