#include "xml/wellformed.hpp"

#include <doctest/doctest.h>

#include "broken_inputs.hpp"
#include "pathvet/xml/read.hpp"
#include "xml/document.hpp"

namespace pathvet {
namespace {

using namespace std::string_literals;

std::string first_fault(const std::string& text) {
  xml::Document document(text, "x");
  return test::listed(document.faults_in_order());
}

struct Case {
  std::string text;
  std::string fault;
};

TEST_CASE("what XML 1.0 refuses is refused, at its place") {
  const std::vector<Case> cases{
      {"", "1:1: the file has no root element"},
      {" \n<!-- a -->\n", "3:1: the file has no root element"},
      {"a<cell/>", "1:1: text before the root element"},
      {"<cell/>\n b", "2:2: text after the root element; expected the end of the file"},
      {"<cell/><cell/>", "1:8: a second root element; expected the end of the file"},
      {"<cell/></cell>", "1:8: an end tag after the root element's end"},
      {"<cell/>&amp;", "1:8: text after the root element; expected the end of the file"},
      {"<cell/><![CDATA[x]]>", "1:8: text after the root element; expected the end of the file"},
      {"<cell><arm></cell>", "1:12: </cell> where </arm> was expected (opened at line 1)"},
      {"<cell>\n<arm>\n</Arm></cell>", "3:1: </Arm> where </arm> was expected (opened at line 2)"},
      {"<cell>\n <arm>\n</arm>", "1:1: <cell> is not closed; expected </cell>"},
      {"<cell a='1'", "1:1: the tag <cell> is not closed; expected \">\""},
      {"<cell></cell", "1:13: the end tag </cell> is not closed; expected \">\""},
      {"<cell></cell a='1'>", "1:14: the end tag </cell> is not closed; expected \">\""},
      {"<cell a='1' b='2' a='3'/>", "1:19: the attribute \"a\" stands twice in <cell>"},
      {"<cell a='1'b='2'/>", "1:12: expected white space, \">\" or \"/>\" in the tag <cell>"},
      {"<cell a/>", "1:8: expected \"=\" after the attribute's name \"a\""},
      {"<cell a=1/>", "1:9: the value of the attribute \"a\" is not in quotes"},
      {"<cell a='1/>", "1:9: the value of the attribute \"a\" has no closing quote"},
      {"<cell a='<'/>",
       "1:10: \"<\" in the value of the attribute \"a\"; expected \"&lt;\" (or the closing quote before it)"},
      {"<cell 1a='1'/>", "1:7: expected an attribute's name in the tag <cell>"},
      {"<cell -a='1'/>", "1:7: expected an attribute's name in the tag <cell>"},
      {"<1cell/>", "1:1: \"<\" begins no tag here; expected an element's name (or \"&lt;\")"},
      {"< cell/>", "1:1: \"<\" begins no tag here; expected an element's name (or \"&lt;\")"},
      {"<cell><</cell>", "1:7: \"<\" begins no tag here; expected an element's name (or \"&lt;\")"},
      {"<cell><!ELEMENT a></cell>",
       "1:7: \"<\" begins no tag here; expected an element's name (or \"&lt;\")"},
      {"<cell>&nbsp;</cell>", "1:7: unknown entity \"&nbsp;\"; expected lt, gt, amp, apos or quot"},
      {"<cell a='&nbsp;'/>", "1:10: unknown entity \"&nbsp;\"; expected lt, gt, amp, apos or quot"},
      {"<cell>a & b</cell>", "1:9: \"&\" begins no reference here; expected \"&amp;\""},
      {"<cell>&lt </cell>", "1:7: \"&\" begins no reference here; expected \"&amp;\""},
      {"<cell>&#;</cell>",
       "1:7: a broken character reference; expected for instance \"&#176;\" or \"&#xB0;\""},
      {"<cell>&#xg;</cell>",
       "1:7: a broken character reference; expected for instance \"&#176;\" or \"&#xB0;\""},
      {"<cell>&#XB0;</cell>",
       "1:7: a broken character reference; expected for instance \"&#176;\" or \"&#xB0;\""},
      {"<cell>&#0;</cell>", "1:7: a reference to a character that XML does not allow"},
      {"<cell>&#x1F;</cell>", "1:7: a reference to a character that XML does not allow"},
      {"<cell>&#xD800;</cell>", "1:7: a reference to a character that XML does not allow"},
      {"<cell>&#xFFFE;</cell>", "1:7: a reference to a character that XML does not allow"},
      {"<cell>&#4294967337;</cell>", "1:7: a reference to a character that XML does not allow"},
      {"<cell>]]></cell>", "1:7: \"]]>\" in text; expected \"]]&gt;\""},
      {"<cell><![CDATA[ </cell>", "1:7: the CDATA section is not closed; expected \"]]>\""},
      {"<cell><!-- a -- b --></cell>", "1:14: \"--\" inside a comment"},
      {"<cell><!-- a ---></cell>", "1:14: \"--\" inside a comment"},
      {"<cell><!--></cell>", "1:7: the comment is not closed; expected \"-->\""},
      {"<cell><!-- a </cell>", "1:7: the comment is not closed; expected \"-->\""},
      {"<cell><? a?></cell>", "1:7: a processing instruction without a name"},
      {"<cell><?a b</cell>", "1:7: the processing instruction is not closed; expected \"?>\""},
      {"<cell><?a+b?></cell>", "1:10: expected \"?>\" or white space in the processing instruction"},
      {"<cell><?xml version='1.0'?></cell>",
       "1:7: the XML declaration must stand at the very beginning of the file"},
      {"\n<?xml version='1.0'?><cell/>",
       "2:1: the XML declaration must stand at the very beginning of the file"},
      {"<?XML version='1.0'?><cell/>",
       "1:1: the XML declaration must stand at the very beginning of the file"},
      {"<?xml?><cell/>", "1:1: the XML declaration must stand at the very beginning of the file"},
      {"<?xml encoding='UTF-8'?><cell/>",
       "1:1: the XML declaration has no version; expected <?xml version=\"1.0\"?>"},
      {"<?xml version='2.0'?><cell/>", "1:7: XML version \"2.0\"; expected \"1.0\""},
      {"<?xml version='1.0' encoding='ISO-8859-1'?><cell/>",
       "1:21: encoding \"ISO-8859-1\"; expected \"UTF-8\""},
      {"<?xml version='1.0' encoding='UTF-16'?><cell/>", "1:21: encoding \"UTF-16\"; expected \"UTF-8\""},
      {"<?xml version='1.0' standalone='maybe'?><cell/>",
       "1:21: standalone=\"maybe\"; expected \"yes\" or \"no\""},
      {"<?xml version='1.0' standalone='yes' encoding='UTF-8'?><cell/>",
       "1:38: the XML declaration is broken here; expected <?xml version=\"1.0\" encoding=\"UTF-8\"?>"},
      {"<?xml version='1.0' standalone=?><cell/>",
       "1:21: the XML declaration is broken here; expected <?xml version=\"1.0\" encoding=\"UTF-8\"?>"},
      {"<?xml version='1.0'encoding='UTF-8'?><cell/>",
       "1:20: the XML declaration is broken here; expected <?xml version=\"1.0\" encoding=\"UTF-8\"?>"},
      {"<?xml version='1.0' encoding='UTF-8?><cell/>",
       "1:21: the XML declaration is broken here; expected <?xml version=\"1.0\" encoding=\"UTF-8\"?>"},
      {"<!DOCTYPE cell><cell/>", "1:1: a DOCTYPE is not allowed"},
      {"<?xml version='1.0'?>\n<!DOCTYPE cell [<!ENTITY a 'b'>]><cell/>", "2:1: a DOCTYPE is not allowed"},
      {"<cell><!DOCTYPE cell></cell>", "1:7: a DOCTYPE is not allowed"},
      {"<cell/><!DOCTYPE cell>", "1:8: a DOCTYPE is not allowed"},
  };
  for (const Case& broken : cases) {
    CAPTURE(broken.text);
    CHECK(first_fault(broken.text) == broken.fault);
  }
}

TEST_CASE("bytes that are no UTF-8 and characters that XML has not are refused") {
  const std::vector<Case> cases{
      {"\xFE\xFF\0<\0a"s, "1:1: the file is UTF-16 or UTF-32; expected UTF-8"},
      {"\xFF\xFE<\0a\0"s, "1:1: the file is UTF-16 or UTF-32; expected UTF-8"},
      {"<\0c\0"s, "1:1: the file is UTF-16 or UTF-32; expected UTF-8"},
      {"\0<\0c"s, "1:1: the file is UTF-16 or UTF-32; expected UTF-8"},
      {"<c>\0</c>"s, "1:4: character U+0000 is not allowed"},
      {"<c>\x1B</c>", "1:4: character U+001B is not allowed"},
      {"<c>\n\xEF\xBF\xBE</c>", "2:1: character U+FFFE is not allowed"},
      {"<c>\xC3\xBC\xFC</c>", "1:5: byte 0xFC is not UTF-8"},      // ISO 8859-1 after a sound u umlaut
      {"<c>\x80</c>", "1:4: byte 0x80 is not UTF-8"},              // a continuation byte alone
      {"<c>\xC0\xAF</c>", "1:4: byte 0xC0 is not UTF-8"},          // overlong in two bytes
      {"<c>\xE0\x80\xAF</c>", "1:4: byte 0xE0 is not UTF-8"},      // in three
      {"<c>\xF0\x80\x80\xAF</c>", "1:4: byte 0xF0 is not UTF-8"},  // in four
      {"<c>\xED\xA0\x80</c>", "1:4: byte 0xED is not UTF-8"},      // a surrogate
      {"<c>\xF4\x90\x80\x80</c>", "1:4: byte 0xF4 is not UTF-8"},  // above U+10FFFF
      {"<c>\xE2\x82", "1:4: byte 0xE2 is not UTF-8"},              // cut off
  };
  for (const Case& broken : cases) {
    CAPTURE(broken.fault);
    CHECK(first_fault(broken.text) == broken.fault);
  }
}

TEST_CASE("what XML 1.0 allows is not refused") {
  const std::vector<std::string> texts{
      "<cell/>",
      "\xEF\xBB\xBF<?xml version='1.0' encoding='utf-8' standalone='no'?>\r\n<cell/>\n<!-- end -->\n<?a b?>",
      "<?xml version=\"1.1\"?><!-- a - b --><cell></cell >",
      "<?xml-stylesheet href='a'?><cell/>",
      "<cell a = '>' b=\"'\" c='\"&quot;&#176;&#xb0;]]>'>]] ></cell>",
      "<cell><![CDATA[<a> & ]] ]]>&lt;&gt;&amp;&apos;&quot;</cell>",
      "<_a:b-c.1/>",
      "<\xC3\xA9l\xC3\xA9ment \xE2\x81\xB0='\xF0\x9F\x98\x80'/>",
  };
  for (const std::string& text : texts) {
    CAPTURE(text);
    CHECK(first_fault(text) == "");
  }
}

TEST_CASE("nesting and attributes have a bound") {
  std::string deep;
  for (std::size_t i = 0; i <= xml::max_depth; ++i) deep += "<a>";
  CHECK(first_fault(deep) == "1:193: elements are nested more than 64 deep");
  std::string wide = "<a";
  for (std::size_t i = 0; i <= xml::max_attributes; ++i) wide += " b" + std::to_string(10 + i) + "=''";
  CHECK(first_fault(wide + "/>") == "1:452: <a> has more than 64 attributes");
}

TEST_CASE("columns count characters, lines end as XML has it") {
  CHECK(first_fault("<c>\xC3\xBC\xF0\x9F\x98\x80&x;</c>").starts_with("1:6:"));
  CHECK(first_fault("<c>\r\n\r\n &x;</c>").starts_with("3:2:"));
  CHECK(first_fault("<c>\r\r &x;</c>").starts_with("3:2:"));
  CHECK(first_fault("\xEF\xBB\xBF<c>&x;</c>").starts_with("1:4:"));
}

}  // namespace
}  // namespace pathvet
